/** Strips of neighbouring lines against their joint intervals. */
import {describe, expect, test} from "vitest";
import type {Strip} from "../../lib/inverse/nouns.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {neighbouringStrips} from "../../lib/study/neighbouring-strips.ts";
import type {LineOutcome, LineStudy} from "../../lib/study/outcome.ts";
import {failedLine, lineStudy} from "../harness/study-fixture.ts";

const DYKE: Strip = {name: "dyke", from: 92, to: 112, group: undefined};
const BASE = lineStudy({step: 4});

interface Made {
  readonly mean: number;
  readonly half?: number;
  readonly offset?: number;
  readonly group?: string;
  readonly strip?: Strip;
  readonly more?: LineStudy["strips"];
}

/** A study that is made up but for what is compared: the mean of a strip and its half-width. */
function outcome(id: string, {mean, half = 1, offset = 0, group = "G1", strip = DYKE, more = []}: Made): LineOutcome {
  const {line} = BASE;
  const stations = {...line.stations, offset: line.stations.offset.map(() => offset)};
  const estimate = {strip, mean, lower: mean - half, upper: mean + half, plainMean: mean};
  const study = {...BASE, line: {...line, id, group, stations}, strips: [estimate, ...more]};
  return {status: "done", id, study};
}

function told(outcomes: readonly LineOutcome[], confidence = 0.95): string[] {
  const across = neighbouringStrips(confidence);
  for (const one of outcomes) across.add(one);
  return across.notices().map(({code, weight, line, message}) => {
    expect({code, weight, line}).toEqual({code: "strip/neighbours-differ", weight: "doubt", line: undefined});
    return message;
  });
}

describe("strips of neighbouring lines", () => {
  test("that overlap raise nothing; a line alone, or without an answer, neither", () => {
    expect(told([outcome("A", {mean: 10}), outcome("B", {mean: 11.9})])).toEqual([]);
    expect(told([outcome("A", {mean: 10}), failedLine("B")])).toEqual([]);
    expect(told([])).toEqual([]);
  });

  test("that do not overlap name the pairs and say what it means", () => {
    const [message, ...rest] = told([
      outcome("A", {mean: 10}),
      outcome("B", {mean: 10.5}),
      outcome("C", {mean: 14}),
      outcome("D", {mean: 14.2}),
    ]);
    expect(rest).toEqual([]);
    expect(message).toMatch(
      /^Strip dyke: lines B and C differ by more than their intervals allow \(1 of 3 pairs of neighbours\): the ground changes between them .* or a line is off/,
    );
  });

  test("neighbours are those beside each other, whatever the order of the files", () => {
    const far = outcome("far", {mean: 20, offset: 300});
    const [message] = told([outcome("A", {mean: 10, offset: 0}), far, outcome("B", {mean: 10.5, offset: 100})]);
    expect(message).toContain("lines B and far differ");
    expect(message).toContain("(1 of 2 pairs of neighbours)");
  });

  test("groups are not compared with each other, and are named where there are several", () => {
    const one = [outcome("A", {mean: 10}), outcome("B", {mean: 10.5})];
    const other = [outcome("X", {mean: 30, group: "G2"}), outcome("Y", {mean: 40, group: "G2"})];
    expect(told([...one, ...other])).toEqual([expect.stringContaining("Strip dyke of group G2: lines X and Y differ")]);
  });

  test("what is not inside the support, or not the same stretch, is not compared", () => {
    const beyond: Strip = {...DYKE, from: 240, to: 260};
    expect(told([outcome("A", {mean: 0, half: 0, strip: beyond}), outcome("B", {mean: 9, strip: beyond})])).toEqual([]);
    const moved: Strip = {...DYKE, from: 96, to: 116, parts: [{from: 96, to: 116}]};
    expect(told([outcome("A", {mean: 10}), outcome("B", {mean: 20, strip: moved})])).toEqual([]);
    const nearly: Strip = {...DYKE, from: 93, to: 113, parts: [{from: 93, to: 113}]};
    expect(told([outcome("A", {mean: 10}), outcome("B", {mean: 20, strip: nearly})])).toHaveLength(1);
  });

  test("each strip has a doubt of its own; of many pairs four are named", () => {
    const more = (mean: number): LineStudy["strips"] => [
      {strip: {...DYKE, name: "rubble"}, mean, lower: mean - 1, upper: mean + 1, plainMean: mean},
    ];
    const lines = Array.from({length: 8}, (_, k) => outcome(`L${k}`, {mean: 10 * k, more: more(k === 0 ? 9 : 0)}));
    const [dyke, rubble, ...rest] = told(lines);
    expect(rest).toEqual([]);
    expect(dyke).toContain("L3 and L4, and 3 more pairs differ");
    expect(rubble).toContain("lines L0 and L1 differ");
  });

  test("chance alone parts a pair of many in no more surveys than the confidence leaves", () => {
    // Half-widths that are noise alone, the worst case: 1.96 σ. 400 surveys of 300 lines; 5 % of them are 20, its
    // standard deviation 4.4. Simple overlap, by 2.77 σ of a difference, would let through 1.7 pairs a survey.
    const random = seededRandom(41);
    let surveys = 0;
    for (let k = 0; k < 400; ++k) {
      const deviates = normalDeviates(random, 300);
      const lines = Array.from(deviates, (mean, n) => outcome(`${n}`, {mean, half: 1.959964}));
      if (told(lines).length > 0) ++surveys;
    }
    expect(surveys).toBeLessThanOrEqual(20 + 3 * 4.4);
    expect(surveys).toBeGreaterThan(0);
  });
});
