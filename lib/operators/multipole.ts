/**
 * The truncated operator on long lines, in a time that grows with the readings and panels themselves: nothing n × m is
 * formed. Panels near a reading act by their exact kernels; farther ones by multipoles of boxes of chainage, twice as
 * long at each level. With u = ζ − w,
 *
 *   G(w) = ∫ f dt/u = −Σ_k m_k (w − c)^(−k−1),   m_k = ∫ f (ζ − c)^k dt,
 *
 * and about the middle c′ of the readings of a box that is no neighbour, G = Σ_l g_l (w − c′)^l with
 *
 *   g_l = −(−1)^l Σ_k C(k + l, l) m_k (c′ − c)^(−k−l−1).
 *
 * A reading is Re[a G] or Re[a G′], so that any observable, height, relief and gap is served. The adjoint is the
 * transpose of each step in turn, hence of the same linear map to rounding.
 * Source: Greengard & Rokhlin, J. Comput. Phys. 73 (1987) 325 (from memory).
 */
import {kernelOverPiece} from "../potential/kernel.ts";
import {passes} from "./box-passes.ts";
import {type BoxTree, boxTree} from "./box-tree.ts";
import {panelSide, readingSide, type SourceSide} from "./multipole-sides.ts";
import type {Panels} from "./panels.ts";
import type {Readings} from "./readings.ts";

/** A of readings = A density, without its matrix. */
export interface MultipoleOperator {
  readonly readings: number;
  readonly panels: Panels;
  /** Terms of an expansion. */
  readonly terms: number;
  /** Kernels stored for near panels. */
  readonly near: number;
  /** Readings of a density on the panels; `target` (readings) must not alias `density` (panels). */
  applyInto(target: Float64Array, density: Float64Array): Float64Array;
  /** The adjoint in the plain dot products: readings → panels. */
  adjointInto(target: Float64Array, data: Float64Array): Float64Array;
}

/** What an expansion may leave out, over the kernel at the distance of the boxes. */
const LEFT_OUT = 1e-10;
/** Panels a leaf, which balances near kernels against expansions; and the near kernels that memory allows. Heuristics. */
const PANELS_A_LEAF = 48;
const MOST_NEAR = 8e7;
const LEAST_PANELS_A_LEAF = 12;

export function multipoleOperator(readings: Readings, panels: Panels): MultipoleOperator {
  const widest = panels.width.reduce((most, width) => Math.max(most, width), 0);
  const perLeaf = Math.max(
    LEAST_PANELS_A_LEAF,
    Math.min(PANELS_A_LEAF, Math.floor(MOST_NEAR / (3 * Math.max(readings.count, 1)))),
  );
  const tree = boxTree(readings, panels, perLeaf * widest, LEFT_OUT);
  const {terms, leaves} = tree;
  const near = nearKernels(readings, panels, tree);
  const far = farField(readings, tree, panelSide(panels, tree));

  return {
    readings: readings.count,
    panels,
    terms,
    near: near.entries.length,
    applyInto(target, density) {
      far.applyInto(target, density);
      for (let b = 0; b < leaves; ++b) {
        const low = near.panelFrom[b];
        const high = near.panelTo[b];
        for (let r = tree.readingFrom[b]; r < tree.readingFrom[b + 1]; ++r) {
          const start = near.start[r] - low;
          let sum = 0;
          for (let j = low; j < high; ++j) sum += near.entries[start + j] * density[j];
          target[tree.readingAt[r]] += sum;
        }
      }
      return target;
    },
    adjointInto(target, data) {
      far.adjointInto(target, data);
      for (let b = 0; b < leaves; ++b) {
        const low = near.panelFrom[b];
        const high = near.panelTo[b];
        for (let r = tree.readingFrom[b]; r < tree.readingFrom[b + 1]; ++r) {
          const start = near.start[r] - low;
          const value = data[tree.readingAt[r]];
          for (let j = low; j < high; ++j) target[j] += near.entries[start + j] * value;
        }
      }
      return target;
    },
  };
}

/** What sources and readings whose leaves are no neighbours say to each other, by expansions. */
export function farField(readings: Readings, tree: BoxTree, sources: SourceSide) {
  const {terms, levels} = tree;
  const {passUp, passAcross, passDown} = passes(tree);
  const coefficients = (): Float64Array[] => levels.map(({count}) => new Float64Array(2 * terms * count));
  const moments = coefficients();
  const locals = coefficients();
  const clear = (of: readonly Float64Array[]): void => {
    for (const values of of) values.fill(0);
  };
  const readingLocals = readingSide(readings, tree);
  return {
    applyInto(target: Float64Array, density: Float64Array): void {
      clear(moments);
      clear(locals);
      sources.gather(moments[0], density);
      passUp(moments, "sources");
      passAcross(locals, moments, false);
      passDown(locals, "targets");
      readingLocals.evaluate(target, locals[0]);
    },
    adjointInto(target: Float64Array, data: Float64Array): void {
      clear(moments);
      clear(locals);
      readingLocals.gather(locals[0], data);
      passUp(locals, "targets");
      passAcross(moments, locals, true);
      passDown(moments, "sources");
      sources.evaluate(target, moments[0]);
    },
  };
}

/** Kernels of the panels of a reading's own box and its two neighbours, one row after another. */
function nearKernels({x, z, aRe, aIm, order}: Readings, panels: Panels, tree: BoxTree) {
  const {leaves, readingFrom, readingAt, sourceFrom} = tree;
  const from = new Int32Array(leaves);
  const to = new Int32Array(leaves);
  const start = new Float64Array(readingAt.length);
  let size = 0;
  for (let b = 0; b < leaves; ++b) {
    from[b] = sourceFrom[Math.max(b - 1, 0)];
    to[b] = sourceFrom[Math.min(b + 2, leaves)];
    for (let r = readingFrom[b]; r < readingFrom[b + 1]; ++r) {
      start[r] = size;
      size += to[b] - from[b];
    }
  }
  const entries = new Float64Array(size);
  for (let b = 0; b < leaves; ++b)
    for (let r = readingFrom[b]; r < readingFrom[b + 1]; ++r) {
      const i = readingAt[r];
      const row = start[r] - from[b];
      for (let j = from[b]; j < to[b]; ++j)
        entries[row + j] = kernelOverPiece(
          aRe[i],
          aIm[i],
          order[i],
          panels.from[j] - x[i],
          z[i] - panels.yFrom[j],
          panels.to[j] - x[i],
          z[i] - panels.yTo[j],
        );
    }
  return {entries, start, panelFrom: from, panelTo: to};
}
