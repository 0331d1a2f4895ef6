import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {decayLaw, modeDecayRate, modesByLaw} from "../../lib/spectral/mode-decay.ts";
import {countUsableModes, poissonModes, poissonSpectrum, usableModes} from "../../lib/spectral/poisson-spectrum.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";
import {numericTable} from "../harness/reference-table.ts";

const PROMISE = 1e-12;
const unit = (height: number, count: number) => poissonSpectrum({from: -1, to: 1, height, count});

describe("eigenvalues of the truncated Poisson operator", () => {
  test("agree with 20-digit values at every tabulated height", () => {
    const rows = numericTable("poisson-eigenvalues");
    const heights = [...new Set(rows.map(({h}) => h))];
    expect(heights.length).toBe(12);
    for (const height of heights) {
      const {eigenvalues, change} = unit(height, 10);
      for (const {n, mu} of rows.filter(({h}) => h === height))
        absoluteClose(eigenvalues[n], mu, 2e-14, "promised 1e-12; basis and rounding leave a few 1e-15");
      expect(change).toBeLessThan(1e-13);
    }
  });

  test("have the traces Σμ = 2a/(πh) and Σμ² = (2a/(π²h)) arctan(2a/h)", () => {
    // Both are double integrals of the kernel done by hand; they bind all modes at once.
    for (const height of [0.05, 0.3, 1, 7, 100]) {
      const {eigenvalues} = unit(height, Math.ceil(45 / modeDecayRate(height)) + 2);
      let sum = 0;
      let squares = 0;
      for (const mu of eigenvalues) {
        sum += mu;
        squares += mu * mu;
      }
      const trace = 2 / (Math.PI * height);
      const square = (2 / (Math.PI ** 2 * height)) * Math.atan(2 / height);
      // 45 = ln of 3e19 cuts the tail; each computed eigenvalue is off by a few ε.
      assertClose(sum, trace, {
        factor: 20 * Math.sqrt(eigenvalues.length),
        scale: Math.max(1, trace),
        because: "n × ε",
      });
      assertClose(squares, square, {
        factor: 40 * Math.sqrt(eigenvalues.length),
        scale: Math.max(1, square),
        because: "n × ε",
      });
    }
  });

  test("follow the closed expansion far above the interval", () => {
    // μ₀ = 2/(πh) (1 − (2/3) h⁻² + (52/45) h⁻⁴ − …), μ₁ = 4/(3π) h⁻³ (1 − (12/5) h⁻²), μ₂ = 8/(9π) h⁻⁵: leading
    // terms by hand from the Taylor series of the kernel; the higher coefficients identified numerically.
    for (const h of [60, 100]) {
      const {eigenvalues} = unit(h, 3);
      const s = h ** -2;
      absoluteClose(
        eigenvalues[0],
        (2 / (Math.PI * h)) * (1 - (2 / 3) * s + (52 / 45) * s * s),
        1e-12,
        "next term 4 h⁻⁷",
      );
      absoluteClose(eigenvalues[1], (4 / (3 * Math.PI)) * h ** -3 * (1 - (12 / 5) * s), 1e-12, "next term 3 h⁻⁷");
      absoluteClose(eigenvalues[2], (8 / (9 * Math.PI)) * h ** -5, 1e-12, "next term h⁻⁷");
      // The relative error is small as well while μ is well above rounding.
      expect(Math.abs(eigenvalues[1] / ((4 / (3 * Math.PI)) * h ** -3 * (1 - (12 / 5) * s)) - 1)).toBeLessThan(1e-5);
    }
  });

  test("near the interval they tend to the Cauchy process, at the rate h ln(1/h)", () => {
    // −ln μ / h → λ, but only like h ln(1/h): the first correction must be taken along. Its slope 1/(2π) belongs to
    // the phase of the half-line problem, its constant 2.261 was fitted numerically.
    const h = 0.001;
    const {eigenvalues} = unit(h, 10);
    for (const {n, lambda} of numericTable("cauchy-interval")) {
      const rate = -Math.log(eigenvalues[n - 1]) / h;
      const corrected = lambda - ((h * lambda) / (2 * Math.PI)) * (2.261 + Math.log(1 / (h * lambda)));
      absoluteClose(rate, corrected, 1e-5 + 0.1 * (h * lambda) ** 2, "the constant has four digits; next term (hλ)²");
      // Without the correction the agreement is fifty times worse: the test can tell.
      expect(Math.abs(rate - lambda)).toBeGreaterThan(50 * Math.abs(rate - corrected));
    }
  });

  test("depend on height over length alone", () => {
    fc.assert(
      fc.property(
        fc.double({min: -2, max: 2, noNaN: true}),
        fc.double({min: -1e4, max: 1e4, noNaN: true}),
        fc.double({min: -3, max: 3, noNaN: true}),
        (logRatio, from, logScale) => {
          const half = 10 ** logScale;
          const to = from + 2 * half;
          const height = 10 ** logRatio * ((to - from) / 2);
          const moved = poissonSpectrum({from, to, height, count: 6}).eigenvalues;
          const plain = unit(10 ** logRatio, 6).eigenvalues;
          for (let n = 0; n < 6; ++n)
            absoluteClose(moved[n], plain[n], 1e-14, "the ratio rounds by 2ε, −dμ/d ln h ≤ 1");
        },
      ),
      {seed: 31, numRuns: 25},
    );
    const doubled = poissonSpectrum({from: -2, to: 2, height: 0.5, count: 8});
    expect(doubled.eigenvalues).toEqual(unit(0.25, 8).eigenvalues);
  });

  test("come in any number, descending and positive, by the decay law where double precision ends", () => {
    for (const [height, count] of [
      [1, 1],
      [1, 2],
      [1, 400],
      [100, 50],
      [0.1, 300],
    ] as const) {
      const {eigenvalues, fromLaw} = unit(height, count);
      expect(eigenvalues.length).toBe(count);
      expect(fromLaw).toBeLessThanOrEqual(count);
      for (let n = 0; n < count; ++n) {
        expect(eigenvalues[n] > 0 || (n > 300 && eigenvalues[n] === 0)).toBe(true);
        if (n > 0) expect(eigenvalues[n]).toBeLessThanOrEqual(eigenvalues[n - 1]);
        if (n > fromLaw)
          assertClose(Math.log(eigenvalues[n]) || 0, Math.log(decayLaw(n, modeDecayRate(height))) || 0, {
            factor: 10,
            scale: 750,
            because: "the law itself",
          });
      }
    }
    const few = unit(1, 5).eigenvalues;
    const many = unit(1, 400).eigenvalues;
    for (let n = 0; n < 5; ++n) absoluteClose(few[n], many[n], 5e-15, "two bases, each right to a few ε");
  });

  test("a request without sense is refused", () => {
    const good = {from: -1, to: 1, height: 1, count: 3};
    for (const bad of [
      {height: 0},
      {height: -1},
      {height: Number.NaN},
      {height: Number.POSITIVE_INFINITY},
      {to: -1},
      {to: -2},
      {from: Number.NaN},
      {to: Number.POSITIVE_INFINITY},
      {count: 0},
      {count: 2.5},
      {count: Number.NaN},
    ])
      expect(() => poissonSpectrum({...good, ...bad}), JSON.stringify(bad)).toThrow(
        expect.objectContaining({code: "spectral/bad-request", exitStatus: 2}),
      );
    expect(() => unit(1e-7, 3)).toThrow(expect.objectContaining({code: "spectral/basis-too-large", exitStatus: 4}));
    expect(() => unit(0.001, 5000)).toThrow(/fewer eigenvalues/);
  });
});

describe("eigenfunctions", () => {
  test("are orthonormal and satisfy P φ = μ φ at points of the interval", () => {
    const h = 0.4;
    const {eigenvalues, coefficients, basis} = poissonModes({from: -1, to: 1, height: h, count: 6});
    const at = (n: number, x: number) => {
      let before = 0;
      let value = 1;
      let sum = 0;
      for (let k = 0; k < basis; ++k) {
        sum += coefficients[n * basis + k] * Math.sqrt((2 * k + 1) / 2) * value;
        [before, value] = [value, ((2 * k + 1) * x * value - k * before) / (k + 1)];
      }
      return sum;
    };
    // Trapezoids in t = tanh u: exponentially accurate for a smooth integrand, and no Gauss rule in common.
    for (let n = 0; n < 6; ++n) {
      for (const x of [-0.9, 0, 0.37, 1]) {
        let integral = 0;
        for (let u = -20; u <= 20; u += 0.04) {
          const t = Math.tanh(u);
          integral += ((0.04 / Math.cosh(u) ** 2) * h * at(n, t)) / (Math.PI * (h * h + (x - t) ** 2));
        }
        absoluteClose(
          integral,
          eigenvalues[n] * at(n, x),
          1e-11,
          "1000 terms; φ(1) is some 3 and its series ends at 1e-14",
        );
      }
      for (let m = 0; m <= n; ++m) {
        let dot = 0;
        for (let k = 0; k < basis; ++k) dot += coefficients[n * basis + k] * coefficients[m * basis + k];
        assertClose(dot, m === n ? 1 : 0, {factor: 50, scale: 1, because: "orthogonality of the eigensolver"});
      }
    }
  });
});

/** Coefficients of f with f − sign · P f = 1 on (−1, 1), from f = 1 + Σ φ_n (∫φ_n) sign μ_n / (1 − sign μ_n). */
function condenserDensity(height: number, sign: number): Float64Array {
  const count = modesByLaw(modeDecayRate(height), 1e-15);
  const {eigenvalues, coefficients, basis} = poissonModes({from: -1, to: 1, height, count});
  const density = new Float64Array(basis);
  density[0] = Math.SQRT2;
  for (let n = 0; n < count; ++n) {
    const row = n * basis;
    const share = (Math.SQRT2 * coefficients[row] * sign * eigenvalues[n]) / (1 - sign * eigenvalues[n]);
    for (let k = 0; k < basis; ++k) density[k] += share * coefficients[row + k];
  }
  return density;
}

test("Love's condenser integrals at five spacings, opposite and equal charges", () => {
  const rows = numericTable("condenser");
  expect(rows.length).toBe(10);
  for (const {kappa, sign, integral} of rows) {
    const got = Math.SQRT2 * condenserDensity(kappa, sign)[0];
    absoluteClose(got / integral, 1, PROMISE, "1e-15 in μ over 1 − μ₀ = 0.1");
  }
});

test("Lieb–Liniger energies at weak, middle and strong coupling", () => {
  const rows = numericTable("lieb-liniger").filter(({gamma}) => [0.1, 1, 10].includes(gamma));
  expect(rows.length).toBe(3);
  for (const {gamma, alpha, energy} of rows) {
    const f = condenserDensity(alpha, 1);
    const integral = (Math.SQRT2 * f[0]) / (2 * Math.PI);
    // x² = P₀/3 + 2P₂/3, and ∫ p₀ P₀ = √2, ∫ p₂ P₂ = √(2/5).
    const second = ((Math.SQRT2 / 3) * f[0] + (2 / 3) * Math.sqrt(2 / 5) * f[2]) / (2 * Math.PI);
    absoluteClose(alpha / integral / gamma, 1, 3e-11, "α is tabulated to 12 decimals");
    absoluteClose((1 / integral) ** 3 * second, energy, 1e-11, "12 digits of α and of the energy");
  }
});

describe("decay and count of modes", () => {
  test("the rate has its tabulated values and limits", () => {
    for (const {ratio, rate} of numericTable("decay-rate"))
      assertClose(modeDecayRate(ratio), rate, {
        factor: 8,
        scale: rate,
        because: "two means and three elementary functions",
      });
    for (const ratio of [0.001, 0.1])
      assertClose(modeDecayRate(ratio), (Math.PI * ratio) / 2 / (1 + (ratio * Math.LN2) / Math.PI), {
        factor: 8,
        scale: ratio,
        because: "limit from below, next term e^{−2π/ratio}",
      });
    absoluteClose(modeDecayRate(1000) / (2 * Math.log(4000 / Math.PI)), 1, 1e-6, "limit from above, next term ratio⁻²");
  });

  test("eigenvalues fall as exp(−(n + ½)R), the rest shrinking like 0.16/n", () => {
    for (const h of [0.1, 0.5, 1, 2]) {
      const rate = modeDecayRate(h);
      const last = modesByLaw(rate, 1e-9) - 1;
      const {eigenvalues} = unit(h, last + 1);
      for (let n = Math.ceil(last / 2); n <= last; ++n) {
        const rest = -Math.log(eigenvalues[n]) - (n + 0.5) * rate;
        expect(rest * n).toBeGreaterThan(0.12);
        expect(rest * n).toBeLessThan(0.18);
      }
    }
  });

  test("1175 modes stand above 1e-8 at a hundredth of the half-length", () => {
    expect(modesByLaw(modeDecayRate(0.01), 1e-8)).toBe(1175);
    expect(countUsableModes({from: -1, to: 1}, 0.01, 1e-8)).toBe(1175);
  });

  test("counts agree with the spectrum; the law answers where nothing can be computed", () => {
    for (const [h, floor] of [
      [0.1, 1e-8],
      [1, 1e-8],
      [0.3, 0.5],
      [5, 1e-3],
      [100, 0.5],
    ] as const) {
      const count = countUsableModes({from: 10, to: 12}, h, floor);
      const {eigenvalues} = unit(h, count + 3);
      expect(usableModes(eigenvalues, floor)).toBe(count);
      expect(count === 0 || eigenvalues[count - 1] > floor).toBe(true);
      expect(eigenvalues[count] > floor).toBe(false);
    }
    // 11,730 modes would need a basis of 20,000.
    expect(countUsableModes({from: -1, to: 1}, 0.001, 1e-8)).toBe(modesByLaw(modeDecayRate(0.001), 1e-8));
    for (const floor of [0, 1, -1, Number.NaN])
      expect(() => countUsableModes({from: -1, to: 1}, 1, floor)).toThrow(/between 0 and 1/);
  });
});
