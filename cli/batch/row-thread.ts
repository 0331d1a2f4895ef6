/** What a thread runs that solves rows of a grid: they come with all that it needs. */
import {ReportableError} from "../../lib/errors.ts";
import {type RowWork, rowSolver} from "../../lib/study/row-work.ts";
import {packedError} from "./packed-error.ts";
import type {RowThreadAnswer} from "./row-threads.ts";

const solve = rowSolver();

export default function handler(work: RowWork): RowThreadAnswer {
  try {
    return {figures: solve(work)};
  } catch (error) {
    // Between threads an error loses its class.
    if (error instanceof ReportableError) return {failure: packedError(error)};
    throw error;
  }
}
