/** What lines of one geometry share changes no bit of any answer, whichever line came first. */
import {describe, expect, test} from "vitest";
import {multiplierForNorm} from "../../lib/inverse/multiplier-for.ts";
import {tradeoffCurve} from "../../lib/inverse/tradeoff.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {projectOutInPlace} from "../../lib/operators/regional.ts";
import {levelSolver} from "../../lib/solvers/level.ts";
import {levelSystems, systemOf} from "../../lib/solvers/level-systems.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {levelReadings, levelValues, RESPONSES, ZONES} from "../harness/level-line.ts";

const PANELS = panelsOn(ZONES[1]![1], ZONES[1]![2]);
const READINGS = levelReadings(RESPONSES[0]![1]);

/** Every number that a study asks of a line. */
function answersOf(system: ReturnType<typeof systemOf>, seed: number, noise: number) {
  const data = projectOutInPlace(levelValues(seed), system!.basis);
  const solver = levelSolver(system!, data, PANELS).withNoise(noise);
  const curve = tradeoffCurve(solver);
  const bound = 1.01 * solver.norm(1e-4 * solver.largest);
  const multiplier = multiplierForNorm(solver, bound);
  return {
    curve,
    multiplier,
    norm: solver.norm(multiplier) / bound,
    freedom: solver.degreesOfFreedom(multiplier),
    density: solver.estimate(multiplier),
  };
}

describe("systems that level lines share", () => {
  test("answers are the same bits as those of a line alone", () => {
    const systems = levelSystems();
    const of = () => systems.of(READINGS, PANELS, 1);
    answersOf(of(), 3, 0.02);
    const second = answersOf(of(), 4, 0.01);
    expect(second).toEqual(answersOf(systemOf(READINGS, PANELS, 1), 4, 0.01));
    absoluteClose(second.norm, 1, 1e-11, "the search ends at 1e-12, and asks again for the same multiplier");
  });

  test("lines of one geometry get one system, others their own", () => {
    const systems = levelSystems();
    const first = systems.of(READINGS, PANELS, 1);
    expect(systems.of(levelReadings(RESPONSES[0]![1], 0.5), PANELS, 1)).toBe(first);
    expect(systems.of(READINGS, PANELS, 0)).not.toBe(first);
    expect(systems.of(levelReadings(RESPONSES[1]![1]), PANELS, 1)).not.toBe(first);
    expect(systems.of(READINGS, panelsOn(ZONES[1]![1], 2), 1)).not.toBe(first);
  });

  test("a station that strays by less than the cells can tell takes no other line's regional", () => {
    const systems = levelSystems();
    const first = systems.of(READINGS, PANELS, 1)!;
    const strayed = {...READINGS, x: READINGS.x.map((x, i) => (i === 40 ? x + 1e-7 : x))};
    const other = systems.of(strayed, PANELS, 1)!;
    expect(other).not.toBe(first);
    expect(other.basis.rows).not.toEqual(first.basis.rows);
  });

  test("nothing for a line that is not even", () => {
    const uneven = {...READINGS, x: READINGS.x.map((x, i) => (i === 40 ? x + 1 : x))};
    expect(levelSystems().of(uneven, PANELS, 1)).toBeUndefined();
  });
});
