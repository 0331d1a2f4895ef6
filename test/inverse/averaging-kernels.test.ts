/** Averaging kernels against their own definition, and against the estimate that they are of. */
import {describe, expect, test} from "vitest";
import {resolutionOf} from "../../lib/inverse/averages.ts";
import {averagingKernels} from "../../lib/inverse/averaging-kernels.ts";
import {continuumOf} from "../../lib/operators/continuum.ts";
import {densityAt, meanOver} from "../../lib/operators/functional.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {intervalsOf} from "../harness/interval-case.ts";
import {evenly} from "../harness/synthetic-line.ts";

const HEIGHT = 10;
const x = evenly(0, 600, 301);
const z = x.map(() => HEIGHT);
const support = [{from: -60, to: 660}];
const panels = panelsOn(support, 2.5);
const CASE = {x, z, support, noise: 0.01, bound: 20};
const ALPHA = 3;
const continuum = continuumOf(verticalReadings(x, z, CASE.noise), support);

const kernelAt = (weights: Float64Array, t: number): number => {
  const response = densityAt(t).respondInto(new Float64Array(x.length), continuum, 0, x.length);
  return response.reduce((sum, p, i) => sum + p * weights[i], 0);
};

describe.each(["whole", "windows"] as const)("R(x, ·), %s", (layout) => {
  const solver = intervalsOf({...CASE, layout, degree: -1});
  const resolution = resolutionOf(solver, panels, ALPHA, x);
  const kernels = averagingKernels(solver, continuum, panels, resolution, ALPHA, x);

  test("is drawn at the left end, a quarter, the middle, three quarters, the right end", () => {
    expect(kernels).toHaveLength(5);
    const at = kernels.map((kernel) => kernel.at);
    // A panel is 2.5 m wide, and its centre within one panel of the place.
    [0, 150, 300, 450, 600].forEach((place, k) => {
      absoluteClose(at[k]!, place, 2.5, "panel");
    });
  });

  test("has the height of the resolving power at x, and a width of one over it", () => {
    for (const {at, width, chainage, value} of kernels) {
      const middle = (chainage.length - 1) / 2;
      absoluteClose(chainage[middle]! - at, 0, 1e-12, "centre");
      const power = solver.resolvingPower(densityAt(at), ALPHA);
      absoluteClose(value[middle]! / power, 1, 1e-8, "sum over modes against sum over readings");
      expect(width).toBe(1 / power);
    }
  });

  test("has the integral that its weights give in closed form, near one inside the line", () => {
    for (const {at} of kernels) {
      const weights = solver.kernelWeights(densityAt(at), ALPHA);
      const whole = meanOver(support[0]!, support).respondInto(new Float64Array(x.length), continuum, 0, x.length);
      const exact = 720 * whole.reduce((sum, p, i) => sum + p * weights[i], 0);
      const step = 0.5;
      let integral = 0;
      for (let t = support[0]!.from + step / 2; t < support[0]!.to; t += step) integral += step * kernelAt(weights, t);
      // Midpoints every half metre of what is seen from 10 m: e^(−2π·10/0.5), and the ends at h² f'/24.
      absoluteClose(integral, exact, 1e-3, "midpoint rule at the ends of the support");
      if (at > 100 && at < 500) absoluteClose(exact, 1, 0.03, "what the multiplier leaves of a constant");
    }
  });

  test("is symmetric: what x takes from t is what t takes from x", () => {
    if (layout === "windows") return;
    const [left, right] = [
      kernelAt(solver.kernelWeights(densityAt(290), ALPHA), 303),
      kernelAt(solver.kernelWeights(densityAt(303), ALPHA), 290),
    ];
    absoluteClose(left / right, 1, 1e-8, "rounding over the modes");
  });

  test("is widest where the resolution says it is", () => {
    const {worst, local, length} = resolution;
    expect(worst.length).toBeGreaterThanOrEqual(length);
    expect(worst.length).toBeLessThanOrEqual(Math.max(...local));
    const below = [...panels.centre.keys()].filter((j) => panels.centre[j] > 0 && panels.centre[j] < 600);
    // Stations lie within half a panel of a centre, and the width changes by less than a tenth over one.
    absoluteClose(worst.length / Math.max(...below.map((j) => local[j])), 1, 0.1, "between panels");
  });
});
