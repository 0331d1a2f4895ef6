/**
 * Whether a gradient runs the other way from the field beside it: the trade writes it both upward and downward.
 * The field alone says what the gradient should be; one that is against it in sign is told.
 */
import {discrepancy} from "../inverse/rules/discrepancy.ts";
import {doubt, type Notice} from "../notice.ts";
import {correlation} from "../numeric/correlation.ts";
import {applyInto, forwardOperator} from "../operators/forward.ts";
import type {Panels} from "../operators/panels.ts";
import {readingsOfLine} from "../operators/readings-of-line.ts";
import {projectOutInPlace, regionalBasis} from "../operators/regional.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import {operated} from "./operated.ts";

/** Clearly against: chance correlations of noisy gradients stay within a few tenths. A heuristic. */
const AGAINST = -0.5;

/** @returns a doubt for each gradient channel that runs against what the field channels predict */
export function gradientSignNotices(conditioned: ConditionedLine, panels: Panels, degree: number): Notice[] {
  const fields = {...conditioned, channels: conditioned.channels.filter(({response}) => response.order === 0)};
  const gradients = conditioned.channels.filter(({response}) => response.order === 1);
  if (fields.channels.length === 0 || gradients.length === 0) return [];
  const {solver} = operated(fields, panels, degree);
  const {multiplier} = discrepancy.choose({solver, supportLength: 1, lines: 1, largestNorm: solver.norm});
  const density = solver.estimate(multiplier);
  return gradients.flatMap((gradient) => {
    // Agreement is a matter of signs, and is looked for in the readings themselves: nothing is whitened.
    const one = readingsOfLine({...conditioned, channels: [{...gradient, noiseLength: 0}]});
    const predicted = applyInto(new Float64Array(one.count), forwardOperator(one, panels), density);
    const own = regionalBasis(one, degree);
    const measured = projectOutInPlace(Float64Array.from(gradient.channel.values), own);
    const agreement = correlation(projectOutInPlace(predicted, own), measured);
    if (!(agreement < AGAINST)) return [];
    return [
      doubt(
        "channels/gradient-sign",
        `${gradient.channel.role} (${gradient.channel.observable.name}) runs against what the field beside it predicts (correlation ${agreement.toFixed(2)}): it seems to be given upward. Groundward takes gradients downward, lower sensor less upper; change its sign.`,
      ),
    ];
  });
}
