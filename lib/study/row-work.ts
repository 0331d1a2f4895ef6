/**
 * The solving of level rows as work for any thread: plain data go in and come out, and the bits are the same wherever it is
 * done. What rows of one geometry share is built anew in each thread, once.
 */
import {recent} from "../numeric/recent.ts";
import type {Panels} from "../operators/panels.ts";
import type {Readings} from "../operators/readings.ts";
import {regionalBasis} from "../operators/regional.ts";
import {whitenData} from "../operators/whitened.ts";
import {levelRows} from "./level-rows.ts";
import type {BandAsked, RowFigures} from "./row-geometry.ts";

/** Geometries kept at a time; those of a grid mostly come in stretches of rows. */
const KEPT = 2;

/** Rows of one geometry; structured clones of it serve as well. */
export interface RowWork {
  /** Of the geometry, at the one multiplier of the run. */
  readonly key: string;
  readonly readings: Readings;
  readonly panels: Panels;
  /** Of the regional. */
  readonly degree: number;
  readonly bands: readonly BandAsked[];
  readonly multiplier: number;
  /** Readings of each row, SI. */
  readonly values: readonly Float64Array[];
}

/** Threads that solve rows. */
export interface RowThreads {
  readonly count: number;
  solve(work: RowWork): Promise<readonly RowFigures[]>;
}

/** Solves rows of one run. */
export function rowSolver(): (work: RowWork) => RowFigures[] {
  const kept = recent<string, (values: readonly Float64Array[]) => RowFigures[]>(KEPT);
  return (work) =>
    kept(work.key, () => {
      const {readings, panels, degree, bands, multiplier} = work;
      const rows = levelRows(readings, panels, degree, bands);
      if (rows === undefined) throw new Error("rows that are not level came to be solved as level ones");
      const basis = regionalBasis(readings, degree);
      const solve = rows.answering(bands, multiplier);
      return (values) => solve(values.map((row) => whitenData(row, readings, basis)));
    })(work.values);
}
