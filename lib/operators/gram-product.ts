/**
 * G c = ∫ p_i Σ c_j p_j dt over all readings of a line, whitened, by the nodes of the continuum: nothing is left out but
 * what the nodes themselves leave out, and on long lines no matrix is formed. What known means and readings that are means add is summed
 * one by one, for they are few.
 */
import type {Interval} from "../geometry/interval.ts";
import {matVecInto, transposedMatVecInto} from "../numeric/matmul.ts";
import {type Continuum, firstFrom, type Nodes, nodeMatrix, nodesFor} from "./continuum.ts";
import {whitenAdjointInto, whitenInto} from "./correlated-noise.ts";
import {nodeOperator} from "./node-operator.ts";
import {pick} from "./readings.ts";

/** c ↦ G c; a new list. What it needs is made once, when it is first asked for. */
export type GramProduct = (vector: Float64Array) => Float64Array;

/** Entries of readings × nodes up to which the matrix itself is kept and quicker, 32 MB. A heuristic. */
const KEPT = 4e6;

/** @param kept entries of readings × nodes that may be kept */
export function gramProduct(continuum: Continuum, kept = KEPT): GramProduct {
  const {count} = continuum;
  const nodes = nodesFor(continuum, 0, count);
  if (count * nodes.count > kept) return byExpansions(continuum, nodes);
  const matrix = nodeMatrix(continuum, nodes, 0, count);
  const onNodes = new Float64Array(nodes.count);
  return (vector) => {
    transposedMatVecInto(onNodes, matrix, vector, count, nodes.count);
    return matVecInto(new Float64Array(count), matrix, onNodes, count, nodes.count);
  };
}

function byExpansions(continuum: Continuum, nodes: Nodes): GramProduct {
  const {count, stretches, known} = continuum;
  const sensors = Int32Array.from(continuum.x.keys()).filter((i) => stretches?.[i] === undefined);
  const operator = nodeOperator(sensors.length < count ? pick(continuum, sensors) : continuum, nodes.at, nodes.y);
  const means = [...(stretches?.entries() ?? [])].flatMap(([i, stretch]) =>
    stretch === undefined ? [] : [{i, mean: meanOn(nodes, stretch)}],
  );
  const knownMeans = known?.means.stretches?.map((stretch) => meanOn(nodes, stretch!)) ?? [];
  const raw = new Float64Array(count);
  const read = new Float64Array(sensors.length);
  const onNodes = new Float64Array(nodes.count);

  return (vector) => {
    whitenAdjointInto(raw, vector, continuum);
    for (let k = 0; k < sensors.length; ++k) read[k] = raw[sensors[k]];
    operator.adjointInto(onNodes, read);
    for (const {i, mean} of means) mean.addTo(onNodes, raw[i]);
    knownMeans.forEach((mean, t) => {
      let share = 0;
      for (let i = 0; i < count; ++i) share += known!.shares[t * count + i] * vector[i];
      mean.addTo(onNodes, -share);
    });
    for (let k = 0; k < nodes.count; ++k) onNodes[k] *= nodes.rootWeight[k] * nodes.rootWeight[k];
    operator.applyInto(read, onNodes);
    for (let k = 0; k < sensors.length; ++k) raw[sensors[k]] = read[k];
    for (const {i, mean} of means) raw[i] = mean.of(onNodes);
    const result = whitenInto(new Float64Array(count), raw, continuum);
    knownMeans.forEach((mean, t) => {
      const value = mean.of(onNodes);
      for (let i = 0; i < count; ++i) result[i] -= known!.shares[t * count + i] * value;
    });
    return result;
  };
}

/** A mean over a stretch, whose ends are ends of elements. */
function meanOn({at, count}: Nodes, {from, to}: Interval) {
  const first = firstFrom(at, from, 0, count);
  const last = firstFrom(at, to, 0, count);
  return {
    addTo(onNodes: Float64Array, amount: number): void {
      for (let k = first; k < last; ++k) onNodes[k] += amount / (to - from);
    },
    of(onNodes: Float64Array): number {
      let sum = 0;
      for (let k = first; k < last; ++k) sum += onNodes[k];
      return sum / (to - from);
    },
  };
}
