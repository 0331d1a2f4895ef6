/** Readings that the answer must meet. */
import {Matrix, solve} from "ml-matrix";
import {expect, test} from "vitest";
import type {ReportableError} from "../../lib/errors.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {gravity} from "../../lib/potential/gravity.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {Settings} from "../../lib/study/settings.ts";
import type {Tie} from "../../lib/survey/tie.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

/** Line masses of the long-line model: chainage, depth below flight, strength. */
const BODIES = [
  [-60, 36, 36],
  [0, 30, 30],
  [14, 30, 24],
  [70, 45, 54],
] as const;
const CHAINAGE = evenly(-200, 200, 401);

/** Attraction at `down` metres below flight; closed form of horizontal cylinders (Telford et al., 1990, from memory). */
const attraction = (x: number, down: number): number =>
  BODIES.reduce((sum, [xi, zi, strength]) => sum + (strength * (zi - down)) / ((x - xi) ** 2 + (zi - down) ** 2), 0);

const tieAt = (chainage: number, value: number, own: Partial<Tie> = {}): Tie => ({
  line: "made-up",
  at: {chainage},
  elevation: 0,
  value,
  tolerance: 0,
  observable: gravity,
  place: {file: "ties.csv", row: 2},
  ...own,
});

const TIES = [-60, 0, 14, 40, 70].map((x, k) => tieAt(x, attraction(x, 20), {place: {file: "ties.csv", row: k + 2}}));

/** Ground 20 below flight, boundary 5 below ground. */
function settingsWith(
  ties: readonly Tie[] | undefined,
  own: Partial<Parameters<typeof plainSettings>[0]> = {},
): Settings {
  const plain = plainSettings({
    support: [{from: -400, to: 400, group: undefined}],
    regional: -1,
    levels: [{kind: "above-ground", height: 0}],
    ...own,
  });
  return {...plain, model: {...plain.model, boundary: {kind: "depth", depth: 5}, ties}};
}

function lineWith(noise: number, seed: number) {
  const values = CHAINAGE.map((x) => attraction(x, 0));
  return syntheticLine({chainage: CHAINAGE, clearance: 20, values: withNoise(values, noise, seed), noise});
}

const failure = (run: () => unknown): ReportableError => {
  try {
    run();
  } catch (error) {
    return error as ReportableError;
  }
  throw new Error("nothing was thrown");
};

test.each([0.001, 0.01, 0.05])(
  "five exact ties on the ground at noise %s: at least 2.5 times nearer to the truth",
  (share) => {
    const noise = share * Math.max(...CHAINAGE.map((x) => attraction(x, 0)));
    const errorOf = (ties: readonly Tie[] | undefined): number => {
      let total = 0;
      for (let seed = 1; seed <= 6; ++seed) {
        const {levels} = studyLine(lineWith(noise, seed), settingsWith(ties));
        let off = 0;
        let size = 0;
        CHAINAGE.forEach((x, i) => {
          if (Math.abs(x) > 120) return;
          off += (levels[0].value[i] - attraction(x, 20)) ** 2;
          size += attraction(x, 20) ** 2;
        });
        total += Math.sqrt(off / size);
      }
      return total;
    };
    expect(errorOf(undefined) / errorOf(TIES)).toBeGreaterThan(2.5);
  },
);

test("exact ties give the constrained optimum of a general solver", () => {
  const study = studyLine(lineWith(0.05, 3), settingsWith(TIES, {panel: 10, bound: boundRuleNamed("rms:3", 1)}));
  const {panels, choice, estimate} = study;
  const n = panels.count;
  // The equations of Karush, Kuhn and Tucker of: least misfit + α‖f‖², the ties met.
  const a = Matrix.zeros(n + TIES.length, n + TIES.length);
  const right = Matrix.zeros(n + TIES.length, 1);
  const measure = (x: number, z: number, j: number): number => harmonicMeasure(x, z, panels.from[j], panels.to[j]);
  const {values, noise} = study.line.channels[0];
  for (let j = 0; j < n; ++j) {
    for (let k = 0; k < n; ++k) {
      let sum = 0;
      for (const x of CHAINAGE) sum += measure(x, 25, j) * measure(x, 25, k);
      a.set(j, k, sum / Number(noise) ** 2 + (j === k ? choice.multiplier * panels.width[j] : 0));
    }
    let sum = 0;
    CHAINAGE.forEach((x, i) => {
      sum += measure(x, 25, j) * values[i];
    });
    right.set(j, 0, sum / Number(noise) ** 2);
    TIES.forEach((tie, t) => {
      const entry = measure((tie.at as {chainage: number}).chainage, 5, j);
      a.set(n + t, j, entry);
      a.set(j, n + t, entry);
    });
  }
  TIES.forEach((tie, t) => {
    right.set(n + t, 0, tie.value);
  });
  const want = solve(a, right);
  const size = Math.max(...estimate.density.map(Math.abs));
  for (let j = 0; j < n; ++j)
    absoluteClose(
      estimate.density[j],
      want.get(j, 0),
      // Measured 2e-9 over 1e-9 of some entries: the order of sums decides.
      4e-9 * size,
      "the general solver squares a condition of about 1e6",
    );
  TIES.forEach((tie) => {
    const i = CHAINAGE.indexOf((tie.at as {chainage: number}).chainage);
    absoluteClose(study.levels[0].value[i], tie.value, 1e-10 * size, "met exactly, to rounding");
  });
  // The norm that the bound holds is that of the whole source, ties included.
  let square = 0;
  for (let j = 0; j < n; ++j) square += estimate.density[j] ** 2 * panels.width[j];
  absoluteClose(Math.sqrt(square) / choice.bound, 1, 1e-9, "the bound is met to 1e-9");
});

test("a tolerance pulls as a reading of that noise does", () => {
  const at = (tolerance: number): number => {
    const ties = [tieAt(40, attraction(40, 20) + 0.5, {tolerance})];
    const i = CHAINAGE.indexOf(40);
    return studyLine(lineWith(0.05, 3), settingsWith(ties, {bound: boundRuleNamed("rms:3", 1)})).levels[0].value[i];
  };
  const free = studyLine(lineWith(0.05, 3), settingsWith(undefined, {bound: boundRuleNamed("rms:3", 1)})).levels[0]
    .value[CHAINAGE.indexOf(40)];
  const met = attraction(40, 20) + 0.5;
  expect(Math.abs(at(1e-3) - met)).toBeLessThan(5e-3);
  expect(Math.abs(at(1e3) - free)).toBeLessThan(1e-3);
  expect(Math.abs(at(0.3) - met)).toBeLessThan(Math.abs(at(3) - met));
});

test("on the boundary itself a tie is an average over the resolution length", () => {
  const study = studyLine(lineWith(0.05, 3), settingsWith([tieAt(0, 7, {elevation: -5})]));
  const without = studyLine(lineWith(0.05, 3), settingsWith(undefined));
  const length = without.resolution.length;
  const {panels, estimate} = study;
  const widest = Math.max(length, without.resolution.local[Math.floor(panels.count / 2)]);
  let sum = 0;
  for (let j = 0; j < panels.count; ++j) {
    const inside = Math.min(panels.to[j], widest / 2) - Math.max(panels.from[j], -widest / 2);
    if (inside > 0) sum += inside * estimate.density[j];
  }
  absoluteClose(sum / widest, 7, 0.05, "the local resolution is read between panel centres, here at one of them");
});

test.each([
  [
    "too strong for the bound",
    [tieAt(0, 500)],
    "tie/infeasible",
    3,
    /rows? 2 .*least norm that meets them is [\d.e+]+ mGal·√m/,
  ],
  ["far from the line", [tieAt(900, 1)], "tie/far", 2, /600 m|700 m/],
  ["below the boundary", [tieAt(0, 1, {elevation: -6})], "tie/below-boundary", 2, /1\.00 m below/],
  ["twice the same", [tieAt(0, 1), tieAt(0, 1)], "tie/alike", 2, /tell them apart/],
  [
    "of a component on the boundary",
    [tieAt(0, 1, {elevation: -5, observable: {...fieldVertical, response: () => ({re: 0, im: 1, order: 0})}})],
    "tie/component-on-boundary",
    2,
    /downward component/,
  ],
] as const)("%s", (_, ties, code, status, says) => {
  const error = failure(() => studyLine(lineWith(0.05, 3), settingsWith(ties, {bound: boundRuleNamed("rms:3", 1)})));
  expect(error).toMatchObject({code, exitStatus: status});
  expect(error.message).toMatch(says);
});

test("intervals know the ties", () => {
  const i = CHAINAGE.indexOf(3);
  const width = (ties: readonly Tie[] | undefined): number => {
    const {levels} = studyLine(lineWith(0.05, 3), settingsWith(ties, {bound: boundRuleNamed("rms:3", 1)}));
    return levels[0].upper[i] - levels[0].lower[i];
  };
  expect(width(TIES)).toBeLessThan(0.8 * width(undefined));
});

test("by x, y a tie stands at the foot on its line, and one far to the side is refused", () => {
  const plain = lineWith(0.05, 3);
  // A line towards 60 degrees over a map in metres.
  const [east, north] = [Math.sin(Math.PI / 3), Math.cos(Math.PI / 3)];
  const line = {
    ...plain,
    stations: {...plain.stations, x: CHAINAGE.map((x) => 5000 + x * east), y: CHAINAGE.map((x) => 7000 + x * north)},
  };
  const at = (along: number, across: number): Tie =>
    tieAt(0, attraction(40, 20), {
      at: {x: 5000 + along * east - across * north, y: 7000 + along * north + across * east},
    });
  const found = studyLine(line, settingsWith([at(40, 3)])).levels[0].value[CHAINAGE.indexOf(40)];
  absoluteClose(found, attraction(40, 20), 1e-9, "met exactly; the foot is found to rounding of map coordinates");
  const error = failure(() => studyLine(line, settingsWith([at(40, 300)])));
  expect(error).toMatchObject({code: "tie/far", exitStatus: 2});
  expect(error.message).toMatch(/lies 300 m from/);
});

test.each(["single", "simultaneous"] as const)("%s intervals know the ties on the boundary", (intervals) => {
  const strips = [{name: "at the tie", from: -4, to: 4, group: undefined}];
  const halfWidth = (ties: readonly Tie[] | undefined): number => {
    const settings = settingsWith(ties, {bound: boundRuleNamed("rms:3", 1), strips});
    const study = studyLine(lineWith(0.05, 3), {...settings, wanted: {...settings.wanted, intervals}});
    return study.strips[0].upper - study.strips[0].lower;
  };
  const without = halfWidth(undefined);
  const value = attraction(0, 20);
  expect(halfWidth([tieAt(0, value, {elevation: -5, tolerance: 0.2})])).toBeLessThan(0.98 * without);
  expect(halfWidth([tieAt(0, value, {elevation: -5})])).toBeLessThan(0.98 * without);
});
