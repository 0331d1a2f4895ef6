/** Modes of windows at the ends of a level line: those of the nodes of the whole support, at either end. */
import {expect, test} from "vitest";
import {intervalStore} from "../../lib/inverse/interval-store.ts";
import {windowModes} from "../../lib/inverse/window-modes.ts";
import {continuumOf, nodeMatrix, nodesFor} from "../../lib/operators/continuum.ts";
import {levelLine} from "../../lib/operators/level-cells.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import type {DataModes} from "../../lib/spectral/singular-system.ts";
import {dataModes} from "../../lib/spectral/singular-system.ts";

const COUNT = 200;
const ROWS = 120;
const FLOOR = 1e-3;

function modesOver(support: readonly {from: number; to: number}[]) {
  const x = Float64Array.from({length: COUNT}, (_, i) => 5 * (i + 0.5));
  const continuum = continuumOf(verticalReadings(x, new Float64Array(COUNT).fill(20), 0.02), support);
  return {continuum, of: windowModes(continuum, levelLine(continuum)!, FLOOR, intervalStore(), 0)!};
}

/** cᵀ(G + a)⁻¹d by modes, for vectors that all modes see: what estimates are made of. */
function throughModes({left, eigenvalues, count, rows}: DataModes, a: number): Float64Array {
  const vector = Float64Array.from({length: rows}, (_, i) => Math.cos(0.05 * i) + 0.3 * Math.sin(0.4 * i));
  const sum = new Float64Array(rows);
  for (let k = 0; k < count; ++k) {
    let share = 0;
    for (let i = 0; i < rows; ++i) share += left[k * rows + i]! * vector[i]!;
    for (let i = 0; i < rows; ++i) sum[i] += (share * left[k * rows + i]!) / (eigenvalues[k]! + a);
  }
  return sum;
}

const apart = (a: Float64Array, b: Float64Array): number =>
  Math.hypot(...a.map((value, i) => value - b[i]!)) / Math.hypot(...b);

test.each([
  ["an apron on both sides", [{from: -60, to: 1060}]],
  ["more on one side", [{from: -60, to: 1500}]],
  [
    "a gap",
    [
      {from: 0, to: 450},
      {from: 550, to: 1000},
    ],
  ],
] as const)("are those by nodes: %s", (_, support) => {
  const {continuum, of} = modesOver(support);
  for (const [first, last] of [
    [0, ROWS],
    [COUNT - ROWS, COUNT],
    [40, 40 + ROWS],
  ] as const) {
    const nodes = nodesFor(continuum, first, last);
    const want = dataModes(nodeMatrix(continuum, nodes, first, last), ROWS, nodes.count, FLOOR);
    const got = of(first, last);
    expect(got.count).toBe(want.count);
    // The columns left out weigh a hundredth of the floor, and the nodes are good to 1e-9 of the largest.
    for (let k = 0; k < got.count; ++k)
      expect(Math.abs(got.eigenvalues[k]! - want.eigenvalues[k]!)).toBeLessThan(
        0.01 * FLOOR + 1e-9 * want.eigenvalues[0]!,
      );
    // A mode at the floor turns by no more than what is left out over the distance to its neighbour.
    expect(apart(throughModes(got, 100 * FLOOR), throughModes(want, 100 * FLOOR))).toBeLessThan(1e-3);
  }
});
