/**
 * What lines that are read alike have in common: modes of windows, readers of the regional, and estimates fixed by
 * geometry, noise, bound and confidence alone. A key names all that an entry is made of, so that it does not matter who
 * made it, or when.
 */
import {recent} from "../numeric/recent.ts";
import type {DataModes} from "../spectral/singular-system.ts";
import type {LineReaders} from "./line-readers.ts";
import type {SpeltTrials} from "./trials.ts";

export interface IntervalStore {
  /** A number for what a line is made of, the same for the same figures. */
  number(figures: Float64Array): number;
  modes(key: string, make: () => DataModes): DataModes;
  trials(key: string, make: () => SpeltTrials): SpeltTrials;
  readers(key: string, make: () => LineReaders): LineReaders;
  /** R(x, x). */
  resolving(key: string, make: () => number): number;
}

/** A window's modes take about half a megabyte, estimates some tens of kilobytes a number, readers some megabytes. */
const MODES_KEPT = 32;
const TRIALS_KEPT = 1024;
const NUMBERS_KEPT = 4096;
const LINES_KEPT = 2;

export function intervalStore(): IntervalStore {
  const lines: {readonly figures: Float64Array; readonly number: number}[] = [];
  let next = 0;
  return {
    number(figures) {
      const at = lines.findIndex(
        ({figures: own}) => own.length === figures.length && own.every((value, i) => value === figures[i]),
      );
      const [found] = at < 0 ? [{figures: Float64Array.from(figures), number: next++}] : lines.splice(at, 1);
      lines.push(found!);
      if (lines.length > LINES_KEPT) lines.shift();
      return found!.number;
    },
    modes: recent(MODES_KEPT),
    trials: recent(TRIALS_KEPT),
    readers: recent(LINES_KEPT),
    resolving: recent(NUMBERS_KEPT),
  };
}
