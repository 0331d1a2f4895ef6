/** G_ij = ⟨p_i, p_j⟩ in closed form, where readings are kernels over a flat boundary with white noise: no nodes are needed. */
import {pairOver} from "../potential/pair.ts";
import type {Continuum} from "./continuum.ts";

/**
 * G of the readings `first … last − 1`, whitened, row-major and exactly symmetric.
 *
 * @returns undefined where the boundary slopes, noise is correlated, or means of f are read or known
 */
export function gramMatrix(continuum: Continuum, first: number, last: number): Float64Array | undefined {
  const {support, boundary, poles, noise, correlated, stretches, known} = continuum;
  if (boundary !== undefined || correlated || stretches !== undefined || known !== undefined) return undefined;
  const count = last - first;
  const gram = new Float64Array(count * count);
  for (let i = 0; i < count; ++i) {
    const own = poles[first + i]!;
    const scale = 1 / noise[first + i];
    for (let j = 0; j <= i; ++j) {
      const common = (pairOver(support, own, poles[first + j]!) * scale) / noise[first + j];
      gram[i * count + j] = common;
      gram[j * count + i] = common;
    }
  }
  return gram;
}
