/**
 * Cross-validation by blocks: how well each block of neighbouring readings is foretold by all others. Neighbours closer
 * than the resolution tell almost the same, and noise that they share would foretell itself; so a block is as long as
 * the resolution of the most likely estimate, the finest that is not noise.
 *
 * Prediction at the height of the sensor hardly notices what downward continuation makes of noise, so the score is flat
 * below its minimum, and the minimum too low. Taken is the largest multiplier whose score exceeds the least by no more
 * than one standard error of the difference, block by block.
 * Sources: Wahba, Spline Models for Observational Data (1990), ch. 4; Breiman et al., Classification and Regression Trees
 * (1984), ch. 3, for the standard error (both from memory).
 */
import {InputError, ModelError, NumericalError} from "../../errors.ts";
import {apparentNoise} from "../apparent-noise.ts";
import {type Blocks, leftOut} from "../left-out.ts";
import type {BoundChoice} from "../nouns.ts";
import {assumedChoice, nothingButNoise, unlessChasingNoise} from "./own-choice.ts";
import type {BoundRule, RuleQuestion} from "./rule.ts";

/**
 * Blocks over the support length per degree of freedom. A heuristic, measured on the long line of four masses: longer
 * blocks are foretold by the penalty more than by their neighbours, and the score then asks for too little of it.
 */
const BLOCK_FACTOR = 1;
/** With fewer blocks too much is left out at a time. A heuristic. */
const LEAST_BLOCKS = 6;
/** Step of the search in ln α; a standard error is worth several. */
const STEP = 0.2;

/** Stretches of equal length that hold readings, no longer than `length`; all channels of a stretch stay together. */
export function blocksOf(places: Float64Array, length: number): Blocks {
  const order = Int32Array.from(places.keys()).sort((i, j) => places[i] - places[j] || i - j);
  const from = places[order[0]];
  const span = places[order[order.length - 1]] - from || 1;
  const count = Math.max(LEAST_BLOCKS, Math.ceil(span / length));
  const blockOf = (k: number): number => Math.min(count - 1, Math.floor((count * (places[order[k]] - from)) / span));
  const ends: number[] = [];
  for (let k = 1; k <= order.length; ++k) if (k === order.length || blockOf(k) !== blockOf(k - 1)) ends.push(k);
  return {order, ends: Int32Array.from(ends)};
}

/** Σ error² of each block; undefined where rounding has left nothing of I − H_BB, so close do the estimates follow. */
function scoresAt(errorsAt: (multiplier: number) => Float64Array, {ends}: Blocks, multiplier: number) {
  let errors: Float64Array;
  try {
    errors = errorsAt(multiplier);
  } catch (error) {
    if (error instanceof NumericalError && error.code === "numeric/not-positive-definite") return undefined;
    throw error;
  }
  const squares = new Float64Array(ends.length);
  for (let b = 0, k = 0; b < ends.length; ++b) for (; k < ends[b]; ++k) squares[b] += errors[k] * errors[k];
  return squares;
}

/** Mean difference of two sets of scores over its standard error. */
export function excess(scores: Float64Array, least: Float64Array): number {
  const apart = scores.map((score, b) => score - least[b]);
  const mean = apart.reduce((sum, d) => sum + d, 0) / apart.length;
  const squares = apart.reduce((sum, d) => sum + (d - mean) ** 2, 0);
  const error = Math.sqrt(squares / (apart.length * (apart.length - 1)));
  return mean === 0 ? 0 : mean / error;
}

export const crossValidation: BoundRule = {
  name: "cross-validation",
  text: "cross-validation",
  modes: true,
  choose(question: RuleQuestion): BoundChoice {
    const {solver, places, supportLength} = question;
    if (places === undefined || solver.dataSide === undefined)
      throw new InputError(
        "bound/readings-not-kept",
        "--bound cross-validation leaves readings out one block at a time, and the rows of a grid are pooled. Give --bound discrepancy, corner or balance.",
      );
    const nothing = nothingButNoise(solver);
    if (nothing !== undefined) return assumedChoice("cross-validation", question, nothing);
    const floor = Math.max(solver.least, apparentNoise(solver)?.multiplier ?? 0);
    const length = (BLOCK_FACTOR * supportLength) / solver.degreesOfFreedom(floor);
    const blocks = blocksOf(places, length);
    const errorsAt = leftOut(solver.dataSide(), blocks);
    const tried: {readonly multiplier: number; readonly scores: Float64Array; readonly sum: number}[] = [];
    const steps = Math.ceil(Math.log((10 * solver.largest) / floor) / STEP);
    for (let k = steps; k >= 0; --k) {
      const multiplier = floor * Math.exp(k * STEP);
      const scores = scoresAt(errorsAt, blocks, multiplier);
      if (scores === undefined) break;
      tried.push({multiplier, scores, sum: scores.reduce((sum, score) => sum + score, 0)});
    }
    if (tried.length === 0 || blocks.ends.length < LEAST_BLOCKS / 2)
      throw new ModelError(
        "bound/too-few-blocks",
        `The readings fall into ${blocks.ends.length} blocks, too few to foretell one from the others. Give --bound discrepancy.`,
      );
    const least = tried.reduce((best, each) => (each.sum < best.sum ? each : best));
    const {multiplier} = tried.find((each) => excess(each.scores, least.scores) <= 1) ?? least;
    const found = {
      multiplier,
      reason: `largest multiplier within a standard error of the one that best foretells readings left out: ${blocks.ends.length} blocks of at most ${length.toPrecision(3)} m, the support over the degrees of freedom of the most likely estimate`,
    };
    return assumedChoice("cross-validation", question, unlessChasingNoise(solver, found));
  },
};
