/** What a case measures and how its figures are told. */
import type {Measured} from "./measured.ts";

export interface Figure {
  readonly what: string;
  readonly program: string;
  readonly baseline: string;
  /** Undefined where there is no baseline. */
  readonly ratio: number | undefined;
  readonly target: string;
  /** Undefined where there is no target. */
  readonly met: boolean | undefined;
}

export interface CaseResult {
  readonly figures: readonly Figure[];
  /** Sentences: how it was measured, and how far the answers agree. */
  readonly notes: readonly string[];
  /** Tables of its own, where its figures are many. */
  readonly tables?: readonly string[];
}

export interface BenchCase {
  readonly name: string;
  readonly title: string;
  /** @param folder an empty folder of its own for inputs and results */
  run(folder: string): CaseResult | Promise<CaseResult>;
}

export function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle]! : 0.5 * (sorted[middle - 1]! + sorted[middle]!);
}

const secondsText = (seconds: number): string =>
  seconds < 1 ? `${(1000 * seconds).toFixed(0)} ms` : `${seconds.toFixed(2)} s`;

/** Median with the range, since others may use the machine. */
export const spreadText = (values: readonly number[], text: (value: number) => string = secondsText): string =>
  `${text(median(values))} (${text(Math.min(...values))} – ${text(Math.max(...values))})`;

export const bytesText = (bytes: number): string => `${(bytes / 1e6).toFixed(0)} MB`;

/** Runs of two commands in turn, so that both meet the same machine. */
export function alternate(
  times: number,
  program: () => Measured,
  baseline: () => Measured,
): {readonly program: readonly Measured[]; readonly baseline: readonly Measured[]} {
  const runs: {program: Measured[]; baseline: Measured[]} = {program: [], baseline: []};
  for (let k = 0; k < times; ++k) {
    runs.program.push(program());
    runs.baseline.push(baseline());
  }
  return runs;
}
