/** The source at the chosen multiplier, and what it leaves unexplained. */
import {applyInto, type ForwardOperator} from "../operators/forward.ts";
import {projectOutInPlace, type RegionalBasis} from "../operators/regional.ts";
import type {Solver} from "../solvers/solver.ts";
import type {BoundChoice, SourceEstimate} from "./nouns.ts";

/** @param values readings, SI; the regional is what of them the source leaves inside the span of `basis` */
export function estimateSource(
  solver: Solver,
  choice: BoundChoice,
  operator: ForwardOperator,
  basis: RegionalBasis,
  values: Float64Array,
): SourceEstimate {
  const density = solver.estimate(choice.multiplier);
  const field = applyInto(new Float64Array(values.length), operator, density);
  const left = values.map((value, i) => value - field[i]);
  const residual = projectOutInPlace(Float64Array.from(left), basis);
  return {
    density,
    field,
    regional: left.map((value, i) => value - residual[i]),
    residual,
    misfit: solver.misfit(choice.multiplier),
    norm: solver.norm(choice.multiplier),
    degreesOfFreedom: solver.degreesOfFreedom(choice.multiplier),
    modes: solver.modes ?? 0,
  };
}
