import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {type Block, block} from "../../lib/numeric/block.ts";
import {addProductPlainly} from "../../lib/numeric/plain-product.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {MOST_COLUMNS, MOST_ROWS, MOST_TERMS, SIDE, tileKernel} from "../../lib/numeric/tile-kernel.ts";
import {addLowerProductTransposed, addProductTransposed} from "../../lib/numeric/tile-product.ts";
import {assertClose} from "../harness/assert-close.ts";

interface Operands {
  readonly c: Block;
  readonly a: Block;
  readonly b: Block;
  readonly shape: readonly [m: number, k: number, n: number];
}

/** Blocks inside larger arrays, so that offsets and strides count. */
function operands(seed: number, m: number, k: number, n: number): Operands {
  const random = seededRandom(seed);
  const inside = (rows: number, columns: number): Block =>
    block(normalDeviates(random, 3 + rows * (columns + 2)), 3, columns + 2);
  return {c: inside(m, n), a: inside(m, k), b: inside(n, k), shape: [m, k, n]};
}

type Product = typeof addProductTransposed;

function productBy(product: Product, {c, a, b, shape}: Operands, scale: number): Float64Array {
  const data = c.data.slice();
  product({...c, data}, a, b, ...shape, scale);
  return data;
}

describe("C += s · A Bᵀ", () => {
  test("has a kernel on this machine, so that the next tests compare two makers", () => {
    expect(tileKernel()).toBeDefined();
  });

  test("comes out to the same bits from the kernel and from the plain loops", () => {
    const side = fc.integer({min: 1, max: 40});
    fc.assert(
      fc.property(fc.nat(), side, side, side, fc.double({min: -2, max: 2, noNaN: true}), (seed, m, k, n, scale) => {
        const given = operands(seed, m, k, n);
        expect(productBy(addProductTransposed, given, scale)).toEqual(productBy(addProductPlainly, given, scale));
      }),
      {seed: 1, numRuns: 150},
    );
  });

  test.each([
    {m: MOST_ROWS + 5, k: MOST_TERMS + 3, n: 21},
    {m: 9, k: 2 * MOST_TERMS + 8, n: MOST_COLUMNS + 6},
    {m: MOST_ROWS, k: MOST_TERMS, n: MOST_COLUMNS},
  ])("also beyond what the kernel holds at once: $m × $k × $n", ({m, k, n}) => {
    const given = operands(2, m, k, n);
    expect(productBy(addProductTransposed, given, -1)).toEqual(productBy(addProductPlainly, given, -1));
  });

  test("NaN and infinity come through, and signs of zero are the same", () => {
    const {c, a, b, shape} = operands(3, 11, 18, 13);
    a.data[20] = Number.NaN;
    a.data[60] = Infinity;
    b.data[9] = -Infinity;
    a.data.fill(-0, 140, 170);
    const given = {c, a, b, shape};
    const found = productBy(addProductTransposed, given, 1);
    expect(found.some(Number.isNaN)).toBe(true);
    // `toEqual` holds NaN for equal to itself, and −0 for another number than 0.
    expect(found).toEqual(productBy(addProductPlainly, given, 1));
  });

  test("is the definition, and leaves alone what is not of the block", () => {
    const given = operands(4, 30, 300, 25);
    const [m, k, n] = given.shape;
    const found = productBy(addProductTransposed, given, 0.5);
    const {a, b, c} = given;
    const expected = c.data.slice();
    let largest = 0;
    for (let i = 0; i < m; ++i)
      for (let j = 0; j < n; ++j) {
        let size = 0;
        for (let l = 0; l < k; ++l) {
          const term = 0.5 * a.data[a.offset + i * a.stride + l] * b.data[b.offset + j * b.stride + l];
          expected[c.offset + i * c.stride + j] += term;
          size += Math.abs(term);
        }
        largest = Math.max(largest, size);
      }
    found.forEach((value, at) => {
      // Two orders of the same k + 2 terms.
      assertClose(value, expected[at], {factor: 2 * (k + 2), scale: largest, because: "two orders of one sum"});
    });
    const outside = [0, 1, 2, c.offset + n, c.offset + n + 1];
    for (const at of outside) expect(found[at]).toBe(c.data[at]);
  });
});

test.each([5, 64, 65, 200])(
  "of a symmetric product the lower triangle has the bits of the whole one: order %d",
  (n) => {
    const random = seededRandom(5);
    const a = block(normalDeviates(random, n * 30), 0, 30);
    const whole = new Float64Array(n * n);
    const lower = new Float64Array(n * n);
    addProductTransposed(block(whole, 0, n), a, a, n, 30, n, -2);
    addLowerProductTransposed(block(lower, 0, n), a, a, 30, n, -2);
    for (let i = 0; i < n; ++i)
      expect(lower.subarray(i * n, i * n + i + 1)).toEqual(whole.subarray(i * n, i * n + i + 1));
  },
);

test("a tile of the kernel is the product of its packed rows", () => {
  const kernel = tileKernel()!;
  // Row r of A holds r + 1, row r of B holds 10 (r + 1), four terms each.
  for (let l = 0; l < 4; ++l)
    for (let r = 0; r < SIDE; ++r) {
      kernel.a[SIDE * l + r] = r + 1;
      kernel.b[SIDE * l + r] = 10 * (r + 1);
    }
  kernel.run(1, 1, 4);
  const sums = Array.from({length: SIDE * SIDE}, (_, at) => 40 * (Math.floor(at / SIDE) + 1) * ((at % SIDE) + 1));
  expect([...kernel.sums.subarray(0, SIDE * SIDE)]).toEqual(sums);
});
