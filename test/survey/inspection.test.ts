import {describe, expect, test} from "vitest";
import {openDelimitedSurvey} from "../../lib/acquisition/delimited.ts";
import {inspectSurvey} from "../../lib/survey/inspection.ts";
import {samplingOf} from "../../lib/survey/line-figures.ts";
import {settingsWith} from "../acquisition/settings.ts";
import {memorySource} from "../formats/memory.ts";
import {normals} from "./normals.ts";

const LINES = 6;
const STATIONS = 200;

/** Lines along x, `apart` m apart towards north (negative: south), 5 m steps, alternately flown; `reading` in mGal of line, x and way. */
function survey(
  reading: (line: number, x: number, way: 1 | -1, i: number) => number,
  {height = 60, apart = 100}: {height?: number; apart?: number} = {},
) {
  const rows = ["line,x,y,value"];
  for (let l = 0; l < LINES; ++l)
    for (let i = 0; i < STATIONS; ++i) {
      const way = l % 2 === 0 ? 1 : -1;
      const x = way > 0 ? i * 5 : (STATIONS - 1 - i) * 5;
      rows.push(`L${l},${x},${l * apart},${reading(l, x, way, i)}`);
    }
  return openDelimitedSurvey([memorySource(rows.join("\n"))], settingsWith({clearance: height}));
}

describe("inspection", () => {
  test("gives the figures of a line", async () => {
    const text = "line,x,y,value\nA,100,1,5\nA,90,1,4\nA,80,1,3\nA,80,1,2\nA,40,1,1\nA,30,1,\n";
    const found = await inspectSurvey(
      await openDelimitedSurvey([memorySource(text)], settingsWith({clearance: 30, elevation: 130})),
    );
    const [line] = found.lines;
    expect(line).toMatchObject({id: "A", stations: 5, omitted: 1, repeats: 1, backward: 0, gaps: {count: 1}});
    expect(line!.gaps.largest).toBeCloseTo(40, 9);
    expect(line!.to - line!.from).toBeCloseTo(60, 9);
    expect(line!.spacing.median).toBeCloseTo(10, 9);
    expect(line!.azimuth).toBe(270);
    expect(line!.heights.map(({kind, median}) => [kind, median])).toEqual([
      ["clearance", 30],
      ["elevation", 130],
      ["ground", 100],
    ]);
    expect(line!.channels[0]).toMatchObject({noise: undefined, noiseMeaningful: false});
    expect(line!.channels[0]!.noiseMissing).toMatch(/--noise/);
    expect(line!.channels[0]!.readings.median).toBeCloseTo(3e-5, 15);
    expect(found.notCorrected.map(({name}) => name)).toContain("terrain");
    expect(found.notCorrected.map(({name}) => name)).not.toContain("compensation");
  });

  test("measures noise line by line, and says whether it means anything", async () => {
    const noise = normals(LINES * STATIONS, 4);
    const reading = (l: number, x: number, _: number, i: number) =>
      8 / (1 + ((x - 500) / 120) ** 2) + 0.05 * noise[l * STATIONS + i]!;
    for (const [height, meaningful] of [
      [60, true],
      [40, false],
    ] as const) {
      const found = await inspectSurvey(await survey(reading, {height}));
      for (const line of found.lines) {
        expect(line.channels[0]!.noiseMeaningful).toBe(meaningful);
        // 196 correlated differences: a relative standard error of some 17 %, and 3 of them.
        expect(Math.abs(line.channels[0]!.noise!.sigma / 0.05e-5 - 1)).toBeLessThan(0.5);
      }
    }
  });

  test("finds a heading offset between lines that otherwise agree", async () => {
    const found = await inspectSurvey(await survey((_, x, way) => Math.sin(x / 90) + (way > 0 ? 0.7 : 0)));
    const {heading, pairs, correlation, words} = found.neighbours!;
    expect(pairs.map(({lines}) => lines)).toEqual([0, 1, 2, 3, 4].map((l) => [`L${l}`, `L${l + 1}`]));
    expect(heading.oppositePairs).toBe(5);
    expect(heading.opposite).toBeCloseTo(0.7e-5, 12);
    expect(heading.sameWayPairs).toBe(4);
    expect(heading.sameWay).toBeCloseTo(0, 12);
    expect(correlation).toBeCloseTo(1, 9);
    expect(pairs[0]!.distance).toBeCloseTo(100, 9);
    expect(words).toMatch(/read alike \(5 pairs/);
  });

  test("pairs lines in the order of the files, whichever way their offsets grow", async () => {
    // Each line reads 1 mGal more than the one before, and those flown along the axis 0.7 mGal more.
    const reading = (l: number, x: number, way: number) => Math.sin(x / 90) + l + (way > 0 ? 0.7 : 0);
    const up = (await inspectSurvey(await survey(reading))).neighbours!;
    const down = (await inspectSurvey(await survey(reading, {apart: -100}))).neighbours!;
    for (const {pairs} of [up, down]) {
      expect(pairs.map(({lines}) => lines)).toEqual([0, 1, 2, 3, 4].map((l) => [`L${l}`, `L${l + 1}`]));
      pairs.forEach(({distance, difference}, i) => {
        expect(distance).toBeCloseTo(100, 9);
        // Second less first.
        expect(difference).toBeCloseTo(i % 2 === 0 ? 0.3e-5 : 1.7e-5, 12);
      });
    }
    expect(down.heading).toEqual(up.heading);
  });

  test("says so when neighbours do not read alike", async () => {
    const found = await inspectSurvey(await survey((l, x) => Math.sin(x / 60 + l * 1.5)));
    expect(Math.abs(found.neighbours!.correlation)).toBeLessThan(0.3);
    expect(found.neighbours!.words).toMatch(/do not read alike/);
  });

  test("counts lines that failed", async () => {
    const found = await inspectSurvey(
      await openDelimitedSurvey([memorySource("line,x,y,value\nA,0,0,1\nA,1,0,1\nB,5,0,1\n")], settingsWith()),
    );
    expect(found.failures).toMatchObject([{id: "B", code: "line/one-station"}]);
    expect(found.lines).toHaveLength(1);
    expect(found.neighbours!.words).toMatch(/No two lines/);
  });
});

test("aliased power by spacing over height", () => {
  // e^(−u) and e^(−u)(1 + u + u²/2), u = 2πh/s, in per cent, computed by hand to the digits shown.
  for (const [ratio, field, gradient] of [
    [4, 20.8, 79],
    [2, 4.3, 39],
    [1, 0.19, 5.0],
  ] as const) {
    const {aliased, spacingToHeight} = samplingOf(ratio * 25, 25);
    expect(spacingToHeight).toBe(ratio);
    // Half a unit of the last digit.
    expect(Math.abs(100 * aliased.field - field)).toBeLessThan(ratio === 1 ? 0.005 : 0.05);
    expect(Math.abs(100 * aliased.gradient - gradient)).toBeLessThan(ratio === 1 ? 0.05 : 0.5);
  }
});
