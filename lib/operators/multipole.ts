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

export function multipoleOperator(readings: Readings, panels: Panels): MultipoleOperator {
  const tree = boxTree(readings, panels);
  const {terms, leaves, levels} = tree;
  const near = nearKernels(readings, panels, tree);
  const {passUp, passAcross, passDown} = passes(tree);
  const coefficients = (): Float64Array[] => levels.map(({count}) => new Float64Array(2 * terms * count));
  const moments = coefficients();
  const locals = coefficients();
  const clear = (of: readonly Float64Array[]): void => {
    for (const values of of) values.fill(0);
  };
  const panelMoments = panelSide(panels, tree);
  const readingLocals = readingSide(readings, tree);

  return {
    readings: readings.count,
    panels,
    terms,
    near: near.entries.length,
    applyInto(target, density) {
      clear(moments);
      clear(locals);
      panelMoments.gather(moments[0], density);
      passUp(moments, "sources");
      passAcross(locals, moments, false);
      passDown(locals, "targets");
      readingLocals.evaluate(target, locals[0]);
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
      clear(moments);
      clear(locals);
      readingLocals.gather(locals[0], data);
      passUp(locals, "targets");
      passAcross(moments, locals, true);
      passDown(moments, "sources");
      panelMoments.evaluate(target, moments[0]);
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

/** Kernels of the panels of a reading's own box and its two neighbours, one row after another. */
function nearKernels({x, z, aRe, aIm, order}: Readings, panels: Panels, tree: BoxTree) {
  const {leaves, readingFrom, readingAt, panelFrom} = tree;
  const from = new Int32Array(leaves);
  const to = new Int32Array(leaves);
  const start = new Float64Array(readingAt.length);
  let size = 0;
  for (let b = 0; b < leaves; ++b) {
    from[b] = panelFrom[Math.max(b - 1, 0)];
    to[b] = panelFrom[Math.min(b + 2, leaves)];
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

/**
 * Moments m_k/(k! s^k) of panels about the middle of their leaf, of length s: density → moments, and the transpose.
 * ∫ (ζ − c)^k dt over a straight piece is dt/dζ times the difference of (ζ − c)^(k+1)/(k + 1) at its ends.
 */
function panelSide(panels: Panels, {terms, leaves, panelFrom, levels}: BoxTree) {
  const {from, to, yFrom, yTo, count} = panels;
  const {length, sources} = levels[0];
  const powers = [new Float64Array(2 * terms), new Float64Array(2 * terms)] as const;
  /** ((ζ − c)/s)^(k+1) s/(k + 1)! */
  const powersInto = (target: Float64Array, re: number, im: number): void => {
    let pr = re * length;
    let pi = im * length;
    for (let k = 0; k < terms; ++k) {
      target[2 * k] = pr;
      target[2 * k + 1] = pi;
      const next = (pr * re - pi * im) / (k + 2);
      pi = (pr * im + pi * re) / (k + 2);
      pr = next;
    }
  };
  const each = (visit: (b: number, j: number, a: Float64Array, e: Float64Array, gRe: number, gIm: number) => void) => {
    for (let b = 0; b < leaves; ++b) {
      let a = powers[0];
      let e = powers[1];
      const cRe = sources[2 * b];
      const cIm = sources[2 * b + 1];
      let reached = Number.NaN;
      for (let j = panelFrom[b]; j < Math.min(panelFrom[b + 1], count); ++j) {
        if (from[j] !== reached) powersInto(a, (from[j] - cRe) / length, (yFrom[j] - cIm) / length);
        powersInto(e, (to[j] - cRe) / length, (yTo[j] - cIm) / length);
        const slope = (yTo[j] - yFrom[j]) / (to[j] - from[j]);
        const flatness = 1 / (1 + slope * slope);
        visit(b, j, a, e, flatness, -slope * flatness);
        [a, e] = [e, a];
        reached = to[j];
      }
    }
  };
  return {
    gather(moments: Float64Array, density: Float64Array): void {
      each((b, j, a, e, gRe, gIm) => {
        const at = 2 * terms * b;
        const re = gRe * density[j];
        const im = gIm * density[j];
        for (let k = 0; k < 2 * terms; k += 2) {
          const dr = e[k] - a[k];
          const di = e[k + 1] - a[k + 1];
          moments[at + k] += re * dr - im * di;
          moments[at + k + 1] += re * di + im * dr;
        }
      });
    },
    evaluate(target: Float64Array, moments: Float64Array): void {
      each((b, j, a, e, gRe, gIm) => {
        const at = 2 * terms * b;
        let re = 0;
        let im = 0;
        for (let k = 0; k < 2 * terms; k += 2) {
          const dr = e[k] - a[k];
          const di = e[k + 1] - a[k + 1];
          re += moments[at + k] * dr - moments[at + k + 1] * di;
          im += moments[at + k] * di + moments[at + k + 1] * dr;
        }
        target[j] = gRe * re - gIm * im;
      });
    },
  };
}

/** Readings from g_l l! s^l about the middle of the readings of their leaf, and the transpose. */
function readingSide({x, z, aRe, aIm, order}: Readings, {terms, leaves, readingFrom, readingAt, levels}: BoxTree) {
  const {length, targets} = levels[0];
  const factors = new Float64Array(2 * terms);
  /** What each coefficient weighs in the reading: a ((w − c′)/s)^l/l!, or its derivative. */
  const factorsInto = (b: number, i: number): void => {
    const re = (x[i] - targets[2 * b]) / length;
    const im = (z[i] - targets[2 * b + 1]) / length;
    const skip = order[i];
    factors[0] = 0;
    factors[1] = 0;
    let pr = skip === 0 ? aRe[i] : aRe[i] / length;
    let pi = skip === 0 ? aIm[i] : aIm[i] / length;
    for (let l = skip; l < terms; ++l) {
      factors[2 * l] = pr;
      factors[2 * l + 1] = pi;
      const next = (pr * re - pi * im) / (l + 1 - skip);
      pi = (pr * im + pi * re) / (l + 1 - skip);
      pr = next;
    }
  };
  return {
    evaluate(target: Float64Array, locals: Float64Array): void {
      for (let b = 0; b < leaves; ++b)
        for (let r = readingFrom[b]; r < readingFrom[b + 1]; ++r) {
          const i = readingAt[r];
          factorsInto(b, i);
          const at = 2 * terms * b;
          let sum = 0;
          for (let l = 0; l < 2 * terms; l += 2)
            sum += factors[l] * locals[at + l] - factors[l + 1] * locals[at + l + 1];
          target[i] = sum;
        }
    },
    gather(locals: Float64Array, data: Float64Array): void {
      for (let b = 0; b < leaves; ++b)
        for (let r = readingFrom[b]; r < readingFrom[b + 1]; ++r) {
          const i = readingAt[r];
          factorsInto(b, i);
          const at = 2 * terms * b;
          for (let l = 0; l < 2 * terms; ++l) locals[at + l] += factors[l] * data[i];
        }
    },
  };
}
