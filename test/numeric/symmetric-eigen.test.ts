import fc from "fast-check";
import {EigenvalueDecomposition, Matrix} from "ml-matrix";
import {describe, expect, test} from "vitest";
import {multiplyTransposedInto} from "../../lib/numeric/matmul.ts";
import {seededRandom} from "../../lib/numeric/random.ts";
import {type SymmetricEigen, symmetricEigen, symmetricEigenvalues} from "../../lib/numeric/symmetric-eigen.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";

const matrix = (n: number, entry: (i: number, j: number) => number): Float64Array => {
  const a = new Float64Array(n * n);
  for (let i = 0; i < n; ++i) for (let j = 0; j <= i; ++j) a[j * n + i] = a[i * n + j] = entry(i, j);
  return a;
};
const random = (n: number, seed: number): Float64Array => {
  const {normal} = seededRandom(seed);
  return matrix(n, normal);
};
const poisson = (n: number): Float64Array => matrix(n, (i, j) => 5 / Math.PI / (25 + (i - j) ** 2));
/** Second differences: eigenvalues 2 − 2 cos(kπ/(n + 1)), a classical result. */
const secondDifferences = (n: number): Float64Array => matrix(n, (i, j) => (i === j ? 2 : i - j === 1 ? -1 : 0));
/** Blocks W₂₁⁺ of Wilkinson, each with pairs of nearly equal values, tied by 1e-10. */
const glued = (n: number): Float64Array =>
  matrix(n, (i, j) => (i === j ? Math.abs((i % 21) - 10) : i - j === 1 ? (i % 21 === 0 ? 1e-10 : 1) : 0));
const graded = (n: number): Float64Array => {
  const {uniform} = seededRandom(5);
  return matrix(n, (i, j) => 10 ** ((-150 * (i + j)) / n) * (0.5 + uniform()));
};

/** Residual and departure from orthogonality, both over n ε, and order of the values. */
function check(a: Float64Array, n: number, {values, vectors}: SymmetricEigen): void {
  const norm = values.reduce((size, value) => Math.max(size, Math.abs(value)), 0);
  const images = multiplyTransposedInto(new Float64Array(n * n), vectors, a, n, n, n);
  const gram = multiplyTransposedInto(new Float64Array(n * n), vectors, vectors, n, n, n);
  let residual = 0;
  let skew = 0;
  for (let k = 0; k < n; ++k) {
    for (let j = 0; j < n; ++j) {
      residual = Math.max(residual, Math.abs(images[k * n + j] - values[k] * vectors[k * n + j]));
      skew = Math.max(skew, Math.abs(gram[k * n + j] - (k === j ? 1 : 0)));
    }
    if (k > 0) expect(values[k]).toBeLessThanOrEqual(values[k - 1]);
  }
  // Backward stable methods promise a modest multiple of √n ε; 12 + √n leaves room for small n.
  const factor = 12 + 2 * Math.sqrt(n);
  assertClose(residual, 0, {factor, scale: norm || 1, because: "A v = λ v, backward stability"});
  assertClose(skew, 0, {factor, scale: 1, because: "VVᵀ = 1, backward stability"});
}

describe("symmetricEigen", () => {
  const kinds: [string, (n: number) => Float64Array][] = [
    ["random", (n) => random(n, 1)],
    ["Poisson kernel, most of it deflated", poisson],
    ["second differences, nothing deflated", secondDifferences],
    ["glued Wilkinson blocks, nearly equal values", glued],
    ["graded over 300 decades", graded],
    ["identity", (n) => matrix(n, (i, j) => (i === j ? 1 : 0))],
    ["diagonal, not in order", (n) => matrix(n, (i, j) => (i === j ? Math.sin(7 * i) : 0))],
    ["rank one", (n) => matrix(n, (i, j) => (1 + i) * (1 + j))],
    ["zero", (n) => matrix(n, () => 0)],
    ["identity plus rank one", (n) => matrix(n, (i, j) => 1 + (i === j ? 1 : 0))],
  ];
  for (const [name, make] of kinds) {
    test(`meets its defining equations: ${name}`, () => {
      for (const n of [0, 1, 2, 3, 31, 32, 33, 66, 129, 210]) {
        const a = make(n);
        const before = a.slice();
        const eigen = symmetricEigen(a, n);
        expect(a).toEqual(before);
        check(a, n, eigen);
        const alone = symmetricEigenvalues(a, n);
        const norm = Math.max(Math.abs(alone[0] ?? 0), Math.abs(alone[n - 1] ?? 0));
        for (let k = 0; k < n; ++k)
          assertClose(alone[k], eigen.values[k], {factor: 30 + n, scale: norm, because: "two algorithms, each nε‖A‖"});
      }
    });
  }

  test("second differences have their closed-form values and vectors", () => {
    const n = 400;
    const {values, vectors} = symmetricEigen(secondDifferences(n), n);
    for (let k = 0; k < n; ++k) {
      const angle = ((n - k) * Math.PI) / (n + 1);
      assertClose(values[k], 4 * Math.sin(angle / 2) ** 2, {factor: 20, scale: 4, because: "backward stability"});
    }
    // Neighbouring values lie 5e-4 apart, so vectors are known to about ε‖A‖/5e-4.
    const sign = Math.sign(vectors[0]) || 1;
    for (let i = 0; i < n; ++i) {
      const exact = Math.sqrt(2 / (n + 1)) * Math.sin(((i + 1) * n * Math.PI) / (n + 1));
      absoluteClose(vectors[i] * sign, exact, 1e-11, "gap theorem: 20ε·4 / 1.8e-4");
    }
  });

  test("values agree with an independent library", () => {
    for (const [a, n] of [
      [random(150, 2), 150],
      [poisson(120), 120],
    ] as const) {
      const rows = Array.from({length: n}, (_, i) => [...a.subarray(i * n, (i + 1) * n)]);
      const theirs = new EigenvalueDecomposition(new Matrix(rows), {assumeSymmetric: true}).realEigenvalues.sort(
        (x, y) => y - x,
      );
      const {values} = symmetricEigen(a, n);
      const norm = Math.max(values[0], -values[n - 1]);
      // ml-matrix was measured 1.6e-14 off LAPACK at n = 250.
      for (let k = 0; k < n; ++k)
        assertClose(values[k], theirs[k], {factor: 100, scale: norm, because: "the library's own error"});
    }
  });

  test("a power of two scales values exactly and leaves vectors, to both ends of the range", () => {
    const a = random(70, 3);
    const {values, vectors} = symmetricEigen(a, 70);
    for (const exponent of [1, -7, 1000, -900]) {
      const scaled = symmetricEigen(
        a.map((value) => value * 2 ** exponent),
        70,
      );
      expect(scaled.values).toEqual(values.map((value) => value * 2 ** exponent));
      expect(scaled.vectors).toEqual(vectors);
    }
  });

  test("values settle where the norm is far above the entries and most of it is rounding", () => {
    // Every place is tied to a hundred neighbours, so the largest value is some hundred entries.
    const n = 300;
    const smooth = matrix(n, (i, j) => 60 / (3600 + (i - j) ** 2));
    const alone = symmetricEigenvalues(smooth, n);
    const {values} = symmetricEigen(smooth, n);
    for (let k = 0; k < n; ++k)
      assertClose(alone[k], values[k], {factor: 30 + n, scale: values[0], because: "two algorithms, each nε‖A‖"});
  });

  test("trace and Frobenius norm are kept", () => {
    fc.assert(
      fc.property(fc.integer({min: 1, max: 90}), fc.integer(), (n, seed) => {
        const a = random(n, seed);
        const {values} = symmetricEigen(a, n);
        let trace = 0;
        let square = 0;
        for (let i = 0; i < n; ++i) trace += a[i * n + i];
        for (const entry of a) square += entry * entry;
        const sum = values.reduce((total, value) => total + value, 0);
        const squares = values.reduce((total, value) => total + value * value, 0);
        assertClose(sum, trace, {factor: 4 * n, scale: Math.sqrt(square), because: "n values, each a few ε‖A‖"});
        assertClose(squares, square, {factor: 8 * n, scale: square, because: "n values, each a few ε‖A‖"});
      }),
      {seed: 20, numRuns: 40},
    );
  });

  test("a floor leaves out vectors and moves nothing else", () => {
    const a = poisson(90);
    const all = symmetricEigen(a, 90);
    for (const kept of [0, 1, 40, 90]) {
      const floor = kept === 90 ? -1 : all.values[kept];
      const some = symmetricEigen(a, 90, floor);
      expect(some.values).toEqual(all.values);
      expect(some.vectors).toEqual(all.vectors.subarray(0, kept * 90));
    }
  });

  test("the upper triangle is not read", () => {
    const a = random(50, 4);
    const noisy = a.slice();
    for (let i = 0; i < 50; ++i) for (let j = i + 1; j < 50; ++j) noisy[i * 50 + j] = Number.NaN;
    expect(symmetricEigen(noisy, 50)).toEqual(symmetricEigen(a, 50));
  });

  test("an entry that is not finite is refused by its place", () => {
    for (const bad of [Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]) {
      const a = random(40, 6);
      a[12 * 40 + 5] = bad;
      expect(() => symmetricEigen(a, 40)).toThrow(/\(13, 6\).*finite/);
      expect(() => symmetricEigenvalues(a, 40)).toThrow(expect.objectContaining({code: "numeric/not-finite"}));
    }
  });
});
