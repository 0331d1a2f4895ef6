/** What of a study is worked out when it is first read: it is the same whenever that is, and whatever was read before. */
import {expect, test} from "vitest";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {lazily, replacing, withLater} from "../../lib/numeric/lazily.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {LineStudy} from "../../lib/study/outcome.ts";
import type {Settings} from "../../lib/study/settings.ts";
import {levelSettings, levelSurveyLine} from "../bench/level-input.ts";

const LATER = ["curve", "kernels", "trust", "atBounds"] as const;

const read = (study: LineStudy, order: readonly (typeof LATER)[number][]): readonly unknown[] => {
  for (const key of order) void study[key];
  return LATER.map((key) => study[key]);
};

/** By modes, and without. */
const FEW = 160;
const MANY = 620;
const given = levelSettings(FEW);
const settings: readonly (readonly [string, Settings])[] = [
  ["a given bound", given],
  // It assumes a bound, and answers at multiples of it.
  ["a bound of its own", {...given, bound: boundRuleNamed("discrepancy", 1e-9)}],
];

test.each(settings)("by %s it does not matter when it is read, nor in which order", (_, asked) => {
  const line = levelSurveyLine(FEW, 3);
  const found = read(studyLine(line, asked), LATER);
  expect(read(studyLine(line, asked), [...LATER].reverse())).toEqual(found);
  const spread = {...studyLine(line, asked)};
  expect(LATER.map((key) => spread[key])).toEqual(found);
  // Levels weigh the depth to trust in a remark: it is read before the study is handed out.
  const levels = [{kind: "above-boundary", height: 10}] as const;
  const weighed = studyLine(line, {...asked, wanted: {...asked.wanted, levels}});
  expect([weighed.curve, weighed.kernels, weighed.trust]).toEqual(found.slice(0, 3));
});

test("nor on a line that is solved without modes", () => {
  const line = levelSurveyLine(MANY, 3);
  const found = read(studyLine(line, levelSettings(MANY)), LATER);
  expect(read(studyLine(line, levelSettings(MANY)), [...LATER].reverse())).toEqual(found);
});

test("a property is made once, when it is read, and not by one that replaces it", () => {
  let made = 0;
  const make = lazily(() => ++made);
  const base = withLater({here: 1}, {later: make, twice: () => 2 * make()});
  expect(Object.keys(base)).toEqual(["here", "later", "twice"]);
  const other = replacing(base, {
    get later() {
      return 10 * base.later;
    },
  });
  expect(made).toBe(0);
  expect([other.later, other.twice, other.later, base.later, other.here, made]).toEqual([10, 2, 10, 1, 1, 1]);
});
