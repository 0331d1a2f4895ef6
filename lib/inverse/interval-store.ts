/**
 * What lines that are read alike have in common: modes of windows, and estimates fixed by geometry, noise, bound and
 * confidence alone. A key names all that an entry is made of, so that it does not matter who made it, or when.
 */
import {recent} from "../numeric/recent.ts";
import type {DataModes} from "../spectral/singular-system.ts";
import type {SpeltTrials} from "./trials.ts";

export interface IntervalStore {
  modes(key: string, make: () => DataModes): DataModes;
  trials(key: string, make: () => SpeltTrials): SpeltTrials;
  /** R(x, x). */
  resolving(key: string, make: () => number): number;
}

/** A window's modes take about half a megabyte, estimates some tens of kilobytes a number. */
const MODES_KEPT = 32;
const TRIALS_KEPT = 1024;
const NUMBERS_KEPT = 4096;

export const intervalStore = (): IntervalStore => ({
  modes: recent(MODES_KEPT),
  trials: recent(TRIALS_KEPT),
  resolving: recent(NUMBERS_KEPT),
});
