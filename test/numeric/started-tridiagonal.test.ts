import {describe, expect, test} from "vitest";
import {choleskyInPlace, choleskySolveInto} from "../../lib/numeric/cholesky.ts";
import {matVecInto, outerProductInto} from "../../lib/numeric/matmul.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {startedTridiagonal} from "../../lib/numeric/started-tridiagonal.ts";
import {symmetricEigen} from "../../lib/numeric/symmetric-eigen.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";

describe.each([1, 2, 5, 40, 130])("a tridiagonal form that starts at a vector, order %d", (n) => {
  const random = seededRandom(n);
  const k = outerProductInto(new Float64Array(n * n), normalDeviates(random, n * (n + 9)), n, n + 9);
  const start = normalDeviates(random, n).map((value) => 50 * value);
  const square = start.reduce((sum, value) => sum + value * value, 0);
  const started = startedTridiagonal(k, n, start);
  const {values, vectors} = symmetricEigen(k, n);
  const because = "two algorithms, each nε‖K‖";

  test("has the eigenvalues of the matrix", () => {
    expect(started.values.length).toBe(n);
    values.forEach((value, j) => {
      assertClose(started.values[j], value, {factor: 30 + n, scale: values[0], because});
    });
  });

  test("weighs the start as the eigenvectors do", () => {
    const shares = matVecInto(new Float64Array(n), vectors, start, n, n);
    // Random matrices of this order have gaps of 1e-4 of the norm and more.
    shares.forEach((share, j) => {
      absoluteClose(started.weights[j] / square, share ** 2 / square, 1e-9, "nε over the gaps");
    });
    assertClose(
      started.weights.reduce((sum, weight) => sum + weight, 0),
      square,
      {factor: 10 * n, scale: square, because: "the vectors are a basis"},
    );
  });

  test("solves with any shift as Cholesky does", () => {
    for (const share of [1e-6, 1e-3, 10]) {
      const alpha = share * values[0];
      const shifted = k.slice();
      for (let i = 0; i < n; ++i) shifted[i * n + i] += alpha;
      const expected = choleskySolveInto(new Float64Array(n), choleskyInPlace(shifted, n), start, n);
      const size = Math.hypot(...expected);
      started.resolvent(alpha).forEach((value, i) => {
        absoluteClose(value / size, expected[i] / size, 1e-15 * (30 + n) * (1 + 1 / share), "nε times the condition");
      });
    }
  });

  test("gives the eigenvectors that are asked for", () => {
    const count = Math.ceil(n / 2);
    const some = started.vectors(count);
    expect(some.length).toBe(count * n);
    for (let j = 0; j < count; ++j) {
      const image = matVecInto(new Float64Array(n), k, some.subarray(j * n, (j + 1) * n), n, n);
      image.forEach((value, i) => {
        assertClose(value, values[j] * some[j * n + i], {factor: 30 + n, scale: values[0], because});
      });
    }
  });
});

test("a start of nothing weighs nothing", () => {
  const {values, weights, resolvent} = startedTridiagonal(Float64Array.of(2, 1, 1, 2), 2, new Float64Array(2));
  assertClose(values[0], 3, {factor: 4, scale: 3, because: "two by two"});
  assertClose(values[1], 1, {factor: 4, scale: 3, because: "two by two"});
  expect([...weights, ...resolvent(1)].map(Math.abs)).toEqual([0, 0, 0, 0]);
});
