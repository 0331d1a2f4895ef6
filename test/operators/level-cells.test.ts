import {describe, expect, test} from "vitest";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {levelCells} from "../../lib/operators/level-cells.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {type Readings, readingsOf} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten} from "../../lib/operators/whitened.ts";
import {kernelOverPiece} from "../../lib/potential/kernel.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {HEIGHT, levelCase, levelReadings, NOISE, RESPONSES, SPACING, STATIONS, ZONES} from "../harness/level-line.ts";

const dot = (a: Float64Array, b: Float64Array): number => a.reduce((sum, value, i) => sum + value * b[i]!, 0);
const ROUNDING = "a transform of 512 loses some ten ε of the largest entry";

describe.each(RESPONSES)("cells of a level line, %s", (_, response) => {
  test.each(ZONES)("are the dense operator on the same cells: %s", (_, support, width) => {
    const {readings, cells, panels} = levelCase(response, support, width);
    const system = whiten(
      forwardOperator(readings, panels),
      readings,
      new Float64Array(STATIONS),
      regionalBasis(readings, -1),
    );
    const largest = system.matrix.reduce((most, entry) => Math.max(most, Math.abs(entry)), 0);
    const unit = new Float64Array(cells.count);
    const column = new Float64Array(STATIONS);
    for (let j = 0; j < cells.count; ++j) {
      unit[j] = 1;
      cells.applyInto(column, unit);
      unit[j] = 0;
      for (let i = 0; i < STATIONS; ++i)
        absoluteClose(column[i]!, system.matrix[i * cells.count + j]!, 3e-14 * largest, ROUNDING);
    }
    for (let i = 0; i < STATIONS; ++i) {
      const row = system.matrix.subarray(i * cells.count, (i + 1) * cells.count);
      absoluteClose(cells.rowEnergies[i]! / dot(row, row), 1, 1e-13, "sums of squares, rounded");
    }
  });

  test.each(ZONES)("⟨Bu, c⟩ = ⟨u, Bᵀc⟩: %s", (_, support, width) => {
    const {cells} = levelCase(response, support, width);
    const random = seededRandom(11);
    const u = normalDeviates(random, cells.count);
    const c = normalDeviates(random, STATIONS);
    const applied = cells.applyInto(new Float64Array(STATIONS), u);
    const adjoint = cells.adjointInto(new Float64Array(cells.count), c);
    absoluteClose(
      (dot(applied, c) - dot(u, adjoint)) / Math.sqrt(dot(applied, applied) * dot(c, c)),
      0,
      1e-14,
      ROUNDING,
    );
  });

  test("the diagonals of an endless zone are its sums, one by one", () => {
    const [, support, widest] = ZONES[2]!;
    const {cells} = levelCase(response, support, widest);
    const width = cells.to[10]! - cells.from[10]!;
    const diagonals = cells.endless(40);
    const {aRe, aIm, order} = levelReadings(response);
    const seen = (g: number, at: number): number => {
      const left = g * width - 0.5 * SPACING - at;
      return (
        kernelOverPiece(aRe[0]!, aIm[0]!, order[0]!, left, HEIGHT, left + width, HEIGHT) / Math.sqrt(width) / NOISE
      );
    };
    // What is beyond falls with a power of the distance, and is taken from how much the second half added.
    const sum = (d: number, reach: number): number => {
      let total = 0;
      for (let g = -reach; g < reach; ++g) total += seen(g, 0) * seen(g, d * SPACING);
      return total;
    };
    for (const d of [0, 1, 7, 39]) {
      const power = 2 ** (response.order === 1 || response.im === 0 ? 3 : 1);
      const [near, far] = [sum(d, 40_000), sum(d, 80_000)];
      const want = far + (far - near) / (power - 1);
      absoluteClose(
        diagonals[d]! / diagonals[0]!,
        want / diagonals[0]!,
        1e-8,
        "the brute sum ends at 8,000 heights, and its tail has more than one power",
      );
    }
  });
});

describe("what is no level line", () => {
  const panels = panelsOn([{from: 0, to: 700}], 4);
  const line = (change: (x: Float64Array, z: Float64Array) => void, channels = 1): Readings => {
    const {x, z} = levelReadings({re: 1, im: 0, order: 0});
    change(x, z);
    return readingsOf(
      Array.from({length: channels}, (_, k) => ({x, z, response: {re: 1, im: 0, order: 0}, noise: 0.01 * (1 + k)})),
    );
  };
  test.each([
    ["a station a hundredth of the spacing off", line((x) => (x[7]! += 0.01 * SPACING))],
    ["one a millimetre higher", line((_, z) => (z[7]! += 1e-3))],
    ["two channels", line(() => {}, 2)],
  ])("%s", (_, readings) => {
    expect(levelCells(readings, panels)).toBeUndefined();
  });
  test("a boundary that follows the ground", () => {
    const uneven = panelsOn([{from: 0, to: 700}], 4, {x: Float64Array.of(0, 700), y: Float64Array.of(0, 3)});
    expect(
      levelCells(
        line(() => {}),
        uneven,
      ),
    ).toBeUndefined();
  });
  test("cells cover the source zone and nothing else", () => {
    for (const [, support, width] of ZONES) {
      const {cells} = levelCase({re: 1, im: 0, order: 0}, support, width);
      const length = cells.from.reduce((sum, from, j) => sum + cells.to[j]! - from, 0);
      const wanted = support.reduce((sum, {from, to}) => sum + to - from, 0);
      absoluteClose(length, wanted, 1e-9, "sums of a few hundred widths");
    }
  });
});
