import fc from "fast-check";
import {expect, test} from "vitest";
import {transposition} from "../../lib/products/transposition.ts";
import {memoryStore} from "../formats/memory.ts";

/** Exact in float32 and different for every place. */
const entry = (row: number, column: number, band: number): number => row * 4096 + column * 2 + band;

async function turned(
  width: number,
  height: number,
  bands: number,
): Promise<{rows: number; blocks: number; wrong: number}> {
  const turn = transposition(width, height, bands, memoryStore());
  for (let column = 0; column < width; ++column)
    await turn.column(
      Array.from({length: bands}, (_, band) =>
        Float64Array.from({length: height}, (_, row) => entry(row, column, band)),
      ),
    );
  let rows = 0;
  let blocks = 0;
  let wrong = 0;
  for await (const block of turn.rows()) {
    ++blocks;
    for (let r = 0; r < block.count; ++r)
      for (let column = 0; column < width; ++column)
        for (let band = 0; band < bands; ++band)
          if (block.bands[band]![r * width + column] !== entry(rows + r, column, band)) ++wrong;
    rows += block.count;
  }
  return {rows, blocks, wrong};
}

test("columns come back as rows, whatever the size", async () => {
  await fc.assert(
    fc.asyncProperty(
      fc.integer({min: 1, max: 40}),
      fc.integer({min: 1, max: 40}),
      fc.integer({min: 1, max: 3}),
      async (w, h, b) => {
        const {rows, wrong} = await turned(w, h, b);
        expect([rows, wrong]).toEqual([h, 0]);
      },
    ),
    {seed: 20_260_101, numRuns: 40},
  );
});

test("a grid larger than a group and a block is put together from several of each", async () => {
  // 2047 × 3000 × 2 × 4 bytes = 49 MB: six groups of columns, three blocks of rows.
  const {rows, blocks, wrong} = await turned(2047, 3000, 2);
  expect([rows, wrong]).toEqual([3000, 0]);
  expect(blocks).toBeGreaterThan(2);
});

test("too few, too many or short columns are refused", async () => {
  const turn = transposition(2, 3, 1, memoryStore());
  await turn.column([new Float64Array(3)]);
  await expect(turn.column([new Float64Array(2)])).rejects.toThrow(/2 of 3 rows/);
  await expect(async () => {
    for await (const _ of turn.rows()) throw new Error("no rows were expected");
  }).rejects.toThrow(/1 of 2 columns/);
  await turn.column([new Float64Array(3)]);
  await expect(turn.column([new Float64Array(3)])).rejects.toThrow(/more than 2/);
});
