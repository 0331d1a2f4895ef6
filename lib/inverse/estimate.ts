/** The source at the chosen multiplier, and what it leaves unexplained. */
import {unwhitened, whitened} from "../operators/correlated-noise.ts";
import {applyInto, type ForwardOperator} from "../operators/forward.ts";
import type {Readings} from "../operators/readings.ts";
import {projectOutInPlace, type RegionalBasis} from "../operators/regional.ts";
import type {Solver} from "../solvers/solver.ts";
import type {BoundChoice, ChannelFit, SourceEstimate} from "./nouns.ts";

/**
 * @param operator not needed where the solver knows the field of its source
 * @param values readings, SI; the regional is what of them the source leaves inside the span of `basis`
 */
export function estimateSource(
  solver: Solver,
  choice: BoundChoice,
  operator: ForwardOperator | undefined,
  readings: Readings,
  basis: RegionalBasis,
  values: Float64Array,
): SourceEstimate {
  const density = solver.estimate(choice.multiplier);
  const field =
    operator === undefined
      ? solver.field!(choice.multiplier)
      : applyInto(new Float64Array(values.length), operator, density);
  const left = values.map((value, i) => value - field[i]);
  const unexplained = projectOutInPlace(whitened(left, readings), basis);
  const residual = unwhitened(unexplained, readings.x, readings);
  const channels: ChannelFit[] = [];
  for (let from = 0; from < readings.count; ) {
    let to = from;
    while (to < readings.count && readings.channel[to] === readings.channel[from]) ++to;
    channels.push({
      field: field.slice(from, to),
      regional: left.slice(from, to).map((value, i) => value - residual[from + i]),
      residual: residual.slice(from, to),
    });
    from = to;
  }
  return {
    density,
    channels,
    readings: readings.count,
    misfit: solver.misfit(choice.multiplier),
    norm: solver.norm(choice.multiplier),
    degreesOfFreedom: solver.degreesOfFreedom(choice.multiplier),
    modes: solver.modes,
  };
}
