/**
 * A strip in physical units: its mean density, and the total across it per metre of strike,
 * which is the mean times the length since the density is zero outside the support.
 */
import {totalLength} from "../geometry/interval.ts";
import {partsOf, type StripEstimate} from "../inverse/nouns.ts";
import type {Delivery} from "./delivery.ts";

export interface Bracket {
  readonly value: number;
  readonly lower: number;
  readonly upper: number;
}

export interface StripAnswer {
  readonly mean: Bracket;
  readonly total: Bracket;
  readonly plainMean: number;
}

export function stripAnswer(estimate: StripEstimate, delivery: Delivery): StripAnswer {
  const length = estimate.across ?? totalLength(partsOf(estimate.strip));
  const mean: Bracket = {
    value: delivery.toDensity(estimate.mean),
    lower: delivery.toDensity(estimate.lower),
    upper: delivery.toDensity(estimate.upper),
  };
  return {
    mean,
    total: {value: mean.value * length, lower: mean.lower * length, upper: mean.upper * length},
    plainMean: delivery.toDensity(estimate.plainMean),
  };
}
