/** A rule chooses the Lagrange multiplier from what the solver knows. */
import type {Solver} from "../../solvers/solver.ts";
import type {BoundChoice} from "../nouns.ts";

export interface RuleQuestion {
  readonly solver: Solver;
  /** Length of the support, m: turns a root-mean-square into a norm. */
  readonly supportLength: number;
  /** Lines pooled in the solver, one multiplier for all: its misfit is their sum, its squared norm too. */
  readonly lines: number;
  /** Chainage of each reading in the order of the solver, m; absent where lines are pooled. */
  readonly places?: Float64Array;
  /** The largest norm of a single line at a multiplier, SI·√m. */
  largestNorm(multiplier: number): number;
}

export interface BoundRule {
  readonly name: string;
  /** As the user wrote it, for the record: `rms:0.5`, `discrepancy`. */
  readonly text: string;
  /** Whether it weighs the modes, or leaves readings out: `modal` or `dataSide` of the solver; absent: no. */
  readonly modes?: boolean;
  /** Rules that are to be set beside this one; absent: none. */
  readonly compared?: readonly BoundRule[];
  /** The bound M that the text names, SI·√m, from the length of the support; absent where only data can tell. */
  readonly norm?: (supportLength: number) => number;
  choose(question: RuleQuestion): BoundChoice;
}
