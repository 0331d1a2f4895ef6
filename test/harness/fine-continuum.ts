/**
 * f anywhere on the support by brute force: Gauss nodes a fraction of a metre apart, kernels written out. It shares
 * neither nodes nor closed forms nor kernels with the program, so that a truth made on it can contradict the program.
 */
import {gaussLegendre} from "../../lib/numeric/quadrature.ts";

/** What is read: the downward field of f on a flat boundary, or its downward gradient. */
export type Reads = "field" | "gradient";

export interface Sensor {
  readonly reads: Reads;
  readonly x: number;
  readonly z: number;
  readonly noise: number;
}

/** Field of a line mass of unit strength on the boundary: z/π/(s² + z²); downward gradient: −∂/∂z of it. */
export const seen = ({reads, x, z}: Pick<Sensor, "reads" | "x" | "z">, t: number): number => {
  const s = t - x;
  const square = s * s + z * z;
  return reads === "field" ? z / (Math.PI * square) : (z * z - s * s) / (Math.PI * square * square);
};

export interface FineNodes {
  readonly at: Float64Array;
  readonly weight: Float64Array;
}

const RULE = gaussLegendre(5);

/** Five nodes on every element; elements end at `breaks`, and are no longer than `longest`. */
export function fineNodes(from: number, to: number, longest: number, breaks: readonly number[] = []): FineNodes {
  const stops = [from, ...breaks.filter((t) => t > from && t < to).sort((a, b) => a - b), to];
  const at: number[] = [];
  const weight: number[] = [];
  for (let k = 1; k < stops.length; ++k) {
    const pieces = Math.ceil((stops[k] - stops[k - 1]) / longest);
    const half = (stops[k] - stops[k - 1]) / pieces / 2;
    for (let piece = 0; piece < pieces; ++piece)
      for (let g = 0; g < RULE.nodes.length; ++g) {
        at.push(stops[k - 1] + half * (2 * piece + 1 + RULE.nodes[g]));
        weight.push(half * RULE.weights[g]);
      }
  }
  return {at: Float64Array.from(at), weight: Float64Array.from(weight)};
}

/** ∫ f g over the support. */
export function inner({weight}: FineNodes, f: Float64Array, g: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < weight.length; ++k) sum += weight[k] * f[k] * g[k];
  return sum;
}

/** f scaled to a norm. */
export function scaledTo(nodes: FineNodes, f: Float64Array, norm: number): Float64Array {
  const factor = norm / Math.sqrt(inner(nodes, f, f));
  return f.map((value) => factor * value);
}

/** What every sensor reads of f, without noise. */
export const readingsOfTruth = (nodes: FineNodes, sensors: readonly Sensor[], f: Float64Array): Float64Array =>
  Float64Array.from(sensors, (sensor) => {
    let sum = 0;
    for (let k = 0; k < f.length; ++k) sum += nodes.weight[k] * f[k] * seen(sensor, nodes.at[k]);
    return sum;
  });

/** q − Σ c_i p_i: what of q the readings miss. Sources along it are those that mislead most. */
export const missedBy = (
  nodes: FineNodes,
  sensors: readonly Sensor[],
  weights: Float64Array,
  q: Float64Array,
): Float64Array =>
  q.map((value, k) => sensors.reduce((sum, sensor, i) => sum - weights[i] * seen(sensor, nodes.at[k]), value));
