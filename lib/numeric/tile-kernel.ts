/**
 * Sums Σ_l a_il b_jl for a block of rows of A and of B in WebAssembly, two entries in one instruction (f64x2).
 *
 * Every entry is summed in ascending l from zero, product rounded and then sum rounded: no fused multiplication, no
 * partial sums. So the bits are those of the plain loop, on every machine, and `tile-product.ts` may use either.
 * Both operands are packed, four rows side by side, so that the loop reads its memory once and in order; the layout
 * is that of K. Goto & R. van de Geijn, ACM Trans. Math. Softw. 34 (2008) 12.
 */
import {
  added,
  type Bytes,
  get,
  I32,
  integer,
  minus,
  moduleBytes,
  multiplied,
  pair,
  plus,
  repeated,
  set,
  shiftedLeft,
  store,
  twice,
  V128,
  zeros,
} from "./wasm-module.ts";

/** Rows side by side in a packed operand: the side of a tile, held in eight registers of two numbers. */
export const SIDE = 4;
/** Most rows of A, rows of B and terms of a sum in one call; heuristics: 256 kB of A stay in the second cache. */
export const MOST_ROWS = 128;
export const MOST_COLUMNS = 512;
export const MOST_TERMS = 256;
/** Steps of the inner loop written out one after the other. */
const UNROLLED = 4;
/** Bytes of one step of a packed operand: four numbers. */
const STEP = 8 * SIDE;
const PAGE = 65_536;

/** Terms that a packed operand must hold, the last of them zeros: 0 · 0 added to a sum changes no bit of it. */
export const paddedTerms = (terms: number): number => UNROLLED * Math.ceil(terms / UNROLLED);

/** Scratch of the kernel; nothing in it is kept from one product to the next. */
export interface TileKernel {
  /** Packed: tile after tile of four rows, in it term after term. */
  readonly a: Float64Array;
  readonly b: Float64Array;
  /** Row-major, `SIDE · columnTiles` numbers a row. */
  readonly sums: Float64Array;
  /** Fills `sums`. @param terms as `paddedTerms` gives them */
  run(rowTiles: number, columnTiles: number, terms: number): void;
}

function kernelBytes(pages: number): Uint8Array {
  const [a, b, sums, rowTiles, columnTiles, steps, across, down, left, right, target, more] = Array.from(
    {length: 12},
    (_, i) => i,
  );
  const tile = Array.from({length: 2 * SIDE}, (_, i) => 12 + i);
  const [low, high, entry] = [20, 21, 22];
  const next = (local: number, by: Bytes): Bytes => set(local, plus(get(local), by));
  const oneLess = (local: number): Bytes => set(local, minus(get(local), integer(1)));
  const step = (k: number): Bytes => [
    ...set(low, pair(get(right), k * STEP)),
    ...set(high, pair(get(right), k * STEP + 16)),
    ...Array.from({length: SIDE}, (_, i) => [
      ...set(entry, twice(get(left), k * STEP + 8 * i)),
      ...set(tile[2 * i], added(get(tile[2 * i]), multiplied(get(entry), get(low)))),
      ...set(tile[2 * i + 1], added(get(tile[2 * i + 1]), multiplied(get(entry), get(high)))),
    ]).flat(),
  ];
  const oneTile: Bytes = [
    ...set(right, get(b)),
    ...tile.flatMap((local) => set(local, zeros)),
    ...set(more, get(steps)),
    ...repeated(
      [
        ...Array.from({length: UNROLLED}, (_, k) => step(k)).flat(),
        ...next(left, integer(UNROLLED * STEP)),
        ...next(right, integer(UNROLLED * STEP)),
        ...oneLess(more),
      ],
      get(more),
    ),
    ...Array.from({length: SIDE}, (_, i) => [
      ...store(get(target), 0, get(tile[2 * i])),
      ...store(get(target), 16, get(tile[2 * i + 1])),
      ...next(target, get(across)),
    ]).flat(),
    ...oneLess(down),
  ];
  const body: Bytes = [
    ...set(across, shiftedLeft(get(columnTiles), Math.log2(STEP))),
    ...repeated(
      [
        ...set(left, get(a)),
        ...set(target, get(sums)),
        ...set(down, get(rowTiles)),
        ...repeated(oneTile, get(down)),
        ...set(b, get(right)),
        ...next(sums, integer(STEP)),
        ...oneLess(columnTiles),
      ],
      get(columnTiles),
    ),
  ];
  return moduleBytes(pages, 6, [...new Array<number>(6).fill(I32), ...new Array<number>(11).fill(V128)], body);
}

/** What is used of WebAssembly; the types of the language know it in browsers alone. */
interface Engine {
  validate(bytes: Uint8Array): boolean;
  readonly Module: new (bytes: Uint8Array) => object;
  readonly Instance: new (
    module: object,
  ) => {
    readonly exports: {
      readonly memory: {readonly buffer: ArrayBuffer};
      run(a: number, b: number, sums: number, rowTiles: number, columnTiles: number, steps: number): void;
    };
  };
}

declare const WebAssembly: Engine | undefined;

/** Undefined where the machine has no WebAssembly, or none with pairs. */
export function tileKernel(): TileKernel | undefined {
  const atB = 8 * MOST_ROWS * MOST_TERMS;
  const atSums = atB + 8 * MOST_COLUMNS * MOST_TERMS;
  const bytes = kernelBytes(Math.ceil((atSums + 8 * MOST_ROWS * MOST_COLUMNS) / PAGE));
  if (typeof WebAssembly === "undefined" || !WebAssembly.validate(bytes)) return undefined;
  const {memory, run} = new WebAssembly.Instance(new WebAssembly.Module(bytes)).exports;
  return {
    a: new Float64Array(memory.buffer, 0, MOST_ROWS * MOST_TERMS),
    b: new Float64Array(memory.buffer, atB, MOST_COLUMNS * MOST_TERMS),
    sums: new Float64Array(memory.buffer, atSums, MOST_ROWS * MOST_COLUMNS),
    run: (rowTiles, columnTiles, terms) => run(0, atB, atSums, rowTiles, columnTiles, terms / UNROLLED),
  };
}
