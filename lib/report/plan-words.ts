/** What every reader of a plan must know about its figures, in sentences; the tables, the page and JSON take them from here. */
import type {Plan} from "../study/plan.ts";
import {deliveryOf} from "./delivery.ts";
import {exactText, figureText, metreText, percentText} from "./number-text.ts";

export function planNotes({settings, cases}: Plan): readonly string[] {
  const {confidence, stripStrength, secondClearance, gradientNoise, separation, boundaryDepth, length} = settings;
  const delivery = deliveryOf(settings.observables[0]!);
  const notes = [
    `Half-widths are those of ${percentText(confidence)} intervals on a straight, level line of ${metreText(length)} m over flat ground, with the boundary ${boundaryDepth === 0 ? "at the ground" : `${metreText(boundaryDepth)} m below it`} and ${settings.support.length === 0 ? "sources anywhere under the line and five heights beyond either end" : "sources on the support given only"}. They hold for any source within the bound and do not depend on the readings; rms counts over the whole support.`,
    "Resolution and degrees of freedom take the multiplier N/M², N readings and the bound M: a source at the bound with the misfit that noise leaves then has misfit and penalty alike. Readings will choose another one, smaller where the source needs the whole bound; half-widths do not change with it.",
  ];
  if (cases.some(({strips}) => strips.some(({withGradient}) => withGradient !== undefined)))
    notes.push(
      `With gradient: its vertical gradient is read at the same stations as well, noise ${gradientNoise === undefined ? `√2 times that of the sensor over a separation of ${metreText(separation)} m` : "as given"}.`,
    );
  notes.push(
    `With second pass: the same stations flown again at ${secondClearance === undefined ? "half the clearance" : `${metreText(secondClearance)} m`}, with the same noise and a regional of its own. Both columns are shares of the half-width without it; one that is empty has no such sensor.`,
  );
  if (stripStrength !== undefined)
    notes.push(
      `Told from nothing: the highest clearance at which a strip of mean ${exactText(Number(figureText(Math.abs(delivery.toDensity(stripStrength)), 4).replaceAll("\u202f", "")))} ${delivery.density} is at least two half-widths strong, all else the same. Its interval is then free of zero in at least ${percentText(confidence)} of all surveys, whatever else lies within the bound, and over a strip of mean zero in at most ${percentText(1 - confidence)}. The search ends at a height of a quarter of the spacing and at the length of the line.`,
    );
  return notes;
}
