/** What panels, points of the boundary and readings give to the expansions of their leaves, and take from them; see `multipole.ts`. */
import type {BoxTree} from "./box-tree.ts";
import type {Panels} from "./panels.ts";
import type {Readings} from "./readings.ts";

/** Both ways between values, one a source, and moments m_k/(k! s^k) about the middle of their leaf, of length s. */
export interface SourceSide {
  gather(moments: Float64Array, density: Float64Array): void;
  evaluate(target: Float64Array, moments: Float64Array): void;
}

/**
 * Moments m_k/(k! s^k) of panels about the middle of their leaf, of length s: density → moments, and the transpose.
 * ∫ (ζ − c)^k dt over a straight piece is dt/dζ times the difference of (ζ − c)^(k+1)/(k + 1) at its ends.
 */
export function panelSide(panels: Panels, {terms, leaves, sourceFrom, levels}: BoxTree): SourceSide {
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
      for (let j = sourceFrom[b]; j < Math.min(sourceFrom[b + 1], count); ++j) {
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

/** The same for points of the boundary, whose values are their weights times the density. */
export function pointSide(x: Float64Array, y: Float64Array, {terms, leaves, sourceFrom, levels}: BoxTree): SourceSide {
  const {length, sources} = levels[0];
  const powers = new Float64Array(2 * terms);
  const inverse = Float64Array.from({length: terms}, (_, k) => 1 / (k + 1));
  /** ((ζ − c)/s)^k/k! */
  const powersInto = (b: number, j: number): void => {
    const re = (x[j] - sources[2 * b]) / length;
    const im = (y[j] - sources[2 * b + 1]) / length;
    let pr = 1;
    let pi = 0;
    for (let k = 0; k < terms; ++k) {
      powers[2 * k] = pr;
      powers[2 * k + 1] = pi;
      const next = (pr * re - pi * im) * inverse[k];
      pi = (pr * im + pi * re) * inverse[k];
      pr = next;
    }
  };
  return {
    gather(moments, density) {
      for (let b = 0; b < leaves; ++b)
        for (let j = sourceFrom[b]; j < sourceFrom[b + 1]; ++j) {
          powersInto(b, j);
          const at = 2 * terms * b;
          for (let k = 0; k < 2 * terms; ++k) moments[at + k] += powers[k] * density[j];
        }
    },
    evaluate(target, moments) {
      for (let b = 0; b < leaves; ++b)
        for (let j = sourceFrom[b]; j < sourceFrom[b + 1]; ++j) {
          powersInto(b, j);
          const at = 2 * terms * b;
          let sum = 0;
          for (let k = 0; k < 2 * terms; k += 2)
            sum += moments[at + k] * powers[k] - moments[at + k + 1] * powers[k + 1];
          target[j] = sum;
        }
    },
  };
}

/** Readings from g_l l! s^l about the middle of the readings of their leaf, and the transpose. */
export function readingSide(
  {x, z, aRe, aIm, order}: Readings,
  {terms, leaves, readingFrom, readingAt, levels}: BoxTree,
) {
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
