/** Expansions on their way between boxes: up, across and down; see `multipole.ts`. */
import type {BoxTree} from "./box-tree.ts";

type Side = "sources" | "targets";

/**
 * What passes between boxes. With coefficients over factorials and powers of the length of their box, the shift of
 * moments to the box above is e^n/n! on the lower triangle, that of local coefficients its transpose, and the way across
 * (k + l)!/D^(k+l+1), the same from either side but for the sign of l.
 */
export function passes({terms, levels}: BoxTree) {
  const shift = new Float64Array(2 * terms);
  const turned = new Float64Array(4 * terms);
  const given = new Float64Array(2 * terms);
  /** e^n/n! for e from the middle of the box above to that of box b, in lengths of the one above. */
  const shiftTo = (level: number, b: number, side: Side): void => {
    const above = levels[level + 1];
    const own = levels[level][side];
    const re = (own[2 * b] - above[side][2 * (b >> 1)]) / above.length;
    const im = (own[2 * b + 1] - above[side][2 * (b >> 1) + 1]) / above.length;
    shift[0] = 1;
    shift[1] = 0;
    for (let n = 1; n < terms; ++n) {
      shift[2 * n] = (shift[2 * n - 2] * re - shift[2 * n - 1] * im) / n;
      shift[2 * n + 1] = (shift[2 * n - 2] * im + shift[2 * n - 1] * re) / n;
    }
  };
  return {
    passUp(of: readonly Float64Array[], side: Side): void {
      for (let level = 0; level + 1 < levels.length; ++level) {
        for (let b = 0; b < levels[level].count; ++b) {
          if (!levels[level].holds[side][b]) continue;
          shiftTo(level, b, side);
          const from = 2 * terms * b;
          const to = 2 * terms * (b >> 1);
          let scale = 1;
          for (let j = 0; j < terms; ++j, scale *= 0.5) {
            const re = of[level][from + 2 * j] * scale;
            const im = of[level][from + 2 * j + 1] * scale;
            for (let k = j; k < terms; ++k) {
              const n = 2 * (k - j);
              of[level + 1][to + 2 * k] += shift[n] * re - shift[n + 1] * im;
              of[level + 1][to + 2 * k + 1] += shift[n] * im + shift[n + 1] * re;
            }
          }
        }
      }
    },
    passDown(of: readonly Float64Array[], side: Side): void {
      for (let level = levels.length - 2; level >= 0; --level) {
        for (let b = 0; b < levels[level].count; ++b) {
          if (!levels[level].holds[side][b]) continue;
          shiftTo(level, b, side);
          const to = 2 * terms * b;
          const from = 2 * terms * (b >> 1);
          let scale = 1;
          for (let j = 0; j < terms; ++j, scale *= 0.5) {
            let re = 0;
            let im = 0;
            for (let k = j; k < terms; ++k) {
              const n = 2 * (k - j);
              re += shift[n] * of[level + 1][from + 2 * k] - shift[n + 1] * of[level + 1][from + 2 * k + 1];
              im += shift[n] * of[level + 1][from + 2 * k + 1] + shift[n + 1] * of[level + 1][from + 2 * k];
            }
            of[level][to + 2 * j] += re * scale;
            of[level][to + 2 * j + 1] += im * scale;
          }
        }
      }
    },
    /** From moments to local coefficients, or `back`. */
    passAcross(to: readonly Float64Array[], from: readonly Float64Array[], back: boolean): void {
      levels.forEach(({length, sources, targets, pairSource, pairTarget}, level) => {
        for (let pair = 0; pair < pairSource.length; ++pair) {
          const s = pairSource[pair];
          const t = pairTarget[pair];
          const dRe = (targets[2 * t] - sources[2 * s]) / length;
          const dIm = (targets[2 * t + 1] - sources[2 * s + 1]) / length;
          const size = 1 / (dRe * dRe + dIm * dIm);
          const re = dRe * size;
          const im = -dIm * size;
          turned[0] = -re / length;
          turned[1] = -im / length;
          for (let n = 1; n < 2 * terms - 1; ++n) {
            turned[2 * n] = n * (turned[2 * n - 2] * re - turned[2 * n - 1] * im);
            turned[2 * n + 1] = n * (turned[2 * n - 2] * im + turned[2 * n - 1] * re);
          }
          const give = 2 * terms * (back ? t : s);
          const take = 2 * terms * (back ? s : t);
          for (let k = 0; k < terms; ++k) {
            const sign = back && k % 2 === 1 ? -1 : 1;
            given[2 * k] = sign * from[level][give + 2 * k];
            given[2 * k + 1] = sign * from[level][give + 2 * k + 1];
          }
          for (let l = 0; l < terms; ++l) {
            let sumRe = 0;
            let sumIm = 0;
            for (let k = 0; k < 2 * terms; k += 2) {
              const tr = turned[2 * l + k];
              const ti = turned[2 * l + k + 1];
              sumRe += tr * given[k] - ti * given[k + 1];
              sumIm += tr * given[k + 1] + ti * given[k];
            }
            const sign = !back && l % 2 === 1 ? -1 : 1;
            to[level][take + 2 * l] += sign * sumRe;
            to[level][take + 2 * l + 1] += sign * sumIm;
          }
        }
      });
    },
  };
}
