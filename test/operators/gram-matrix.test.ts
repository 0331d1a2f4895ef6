/** Inner products of readings in closed form, against the nodes of the continuum. */
import {describe, expect, test} from "vitest";
import {outerProductInto} from "../../lib/numeric/matmul.ts";
import {type Continuum, continuumOf, nodeMatrix, nodesFor} from "../../lib/operators/continuum.ts";
import {gramMatrix} from "../../lib/operators/gram-matrix.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {FIELD, GRADIENT, TOTAL_FIELD, type UnevenLine, unevenLine} from "../harness/uneven-line.ts";

const SUPPORT = [
  {from: -60, to: 260},
  {from: 300, to: 640},
];
const [FIRST, LAST] = [7, 71];

const line = (options: Partial<UnevenLine> = {}, boundary?: Parameters<typeof continuumOf>[2]): Continuum =>
  continuumOf(unevenLine({stations: 80, sway: 0.3, ...options}).readings, SUPPORT, boundary);

describe("the Gram matrix of readings", () => {
  test.each([
    // Quadrature of 16 nodes an element: 6e-13 of a field, 3e-9 of a gradient's square, over the largest entry.
    {what: "a field", responses: [FIELD], allowed: 2e-11},
    {what: "a total field", responses: [TOTAL_FIELD], allowed: 2e-11},
    {what: "a field and its gradient", responses: [FIELD, GRADIENT], allowed: 1e-8},
  ])("of $what is that of their nodes", ({responses, allowed}) => {
    const continuum = line({responses});
    const gram = gramMatrix(continuum, FIRST, LAST)!;
    const rows = LAST - FIRST;
    const nodes = nodesFor(continuum, FIRST, LAST);
    const matrix = nodeMatrix(continuum, nodes, FIRST, LAST);
    const other = outerProductInto(new Float64Array(rows * rows), matrix, rows, nodes.count);
    for (let i = 0; i < rows; ++i)
      for (let j = 0; j < rows; ++j) {
        const scale = Math.sqrt(other[i * rows + i] * other[j * rows + j]);
        absoluteClose(gram[i * rows + j] / scale, other[i * rows + j] / scale, allowed, "the quadrature");
        expect(gram[i * rows + j]).toBe(gram[j * rows + i]);
      }
  });

  test("has no closed form over a slope or with correlated noise", () => {
    expect(gramMatrix(line({noiseLength: 12}), FIRST, LAST)).toBeUndefined();
    const slope = {x: Float64Array.of(-100, 700), y: Float64Array.of(-5, -2)};
    expect(gramMatrix(line({}, slope), FIRST, LAST)).toBeUndefined();
  });
});
