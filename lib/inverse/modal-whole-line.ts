/**
 * A line of several sensors as a whole: (G + a) c = v by the modes of G that matter to a. Steps with windows as
 * preconditioner stand still there: on 2,500 stations with field and gradient sixty left a thirtieth of the residual.
 */
import {matVecInto, transposedMatVecInto} from "../numeric/matmul.ts";
import type {Continuum} from "../operators/continuum.ts";
import {gramMatrix} from "../operators/gram-matrix.ts";
import {gramProduct} from "../operators/gram-product.ts";
import {thinDataModesInPlace} from "../spectral/singular-system.ts";
import type {WholeLine} from "./whole-line.ts";

/** G takes 8 bytes an entry while its factor is found: 288 MB at the most. */
const MOST_READINGS = 6000;

/**
 * @param floor modes with λ below it are taken for nothing; an estimate stays valid, for it is measured by G itself
 * @returns undefined where all readings are of one kind, for a long line, and where G is of no low rank or has no closed form
 */
export function modalWholeLine(continuum: Continuum, floor: number): WholeLine | undefined {
  const {count, aRe, aIm, order} = continuum;
  if (count > MOST_READINGS) return undefined;
  const alike = (i: number): boolean => aRe[i] === aRe[0] && aIm[i] === aIm[0] && order[i] === order[0];
  let first = 0;
  while (first < count && alike(first)) ++first;
  if (first === count) return undefined;
  const matrix = gramMatrix(continuum, 0, count);
  const modes = matrix && thinDataModesInPlace(matrix, count, floor);
  if (modes === undefined) return undefined;
  const {left, eigenvalues} = modes;
  return {
    gram: gramProduct(continuum),
    // What lies outside the modes is divided by a alone.
    solve(a, vector) {
      const shares = matVecInto(new Float64Array(modes.count), left, vector, modes.count, count);
      for (let k = 0; k < modes.count; ++k) shares[k] *= -eigenvalues[k] / (eigenvalues[k] + a);
      const solution = transposedMatVecInto(new Float64Array(count), left, shares, modes.count, count);
      for (let i = 0; i < count; ++i) solution[i] = (vector[i] + solution[i]) / a;
      return solution;
    },
  };
}
