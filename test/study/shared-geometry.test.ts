/** Lines of one geometry share what readings take no part in, and no answer shows it. */
import {expect, test} from "vitest";
import {studyLine} from "../../lib/study/line-study.ts";
import {sharedGeometry} from "../../lib/study/shared-geometry.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {levelSettings, levelSurveyLine} from "../bench/level-input.ts";

const STATIONS = 620;
const settings = levelSettings(STATIONS);

/** Stations that stray by less than makes a line uneven. */
const strayed = (line: SurveyLine): SurveyLine => ({
  ...line,
  stations: {...line.stations, chainage: line.stations.chainage.map((x, i) => x + (i === 7 ? 1e-7 : 0))},
});

const answers = (line: SurveyLine, shared?: ReturnType<typeof sharedGeometry>) => {
  const {estimate, resolution, averages, trust} = studyLine(line, settings, undefined, shared);
  return {estimate, resolution, averages, trust};
};

test("the second line of a geometry has the bits that it has alone, and so has one that is all but alike", () => {
  const shared = sharedGeometry();
  answers(levelSurveyLine(STATIONS, 1), shared);
  const second = levelSurveyLine(STATIONS, 2);
  expect(answers(second, shared)).toEqual(answers(second));
  const third = strayed(levelSurveyLine(STATIONS, 3));
  expect(answers(third, shared)).toEqual(answers(third));
});
