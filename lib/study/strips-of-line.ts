/** The strips that a line answers for. */
import {clip, type Support, totalLength} from "../geometry/interval.ts";
import {partsOf, type Strip} from "../inverse/nouns.ts";
import {doubt, type Notice} from "../notice.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {StripSetting} from "./settings.ts";
import {spanOf} from "./support-of-line.ts";

/**
 * Strips of chainage that were asked for this line's group, then polygon strips that meet the line or its support; those
 * that only its straight continuation meets are none of its own.
 * @param onMap polygon strips as they lie on this line
 */
export function stripsOfLine(
  line: SurveyLine,
  support: Support,
  asked: readonly StripSetting[],
  onMap: readonly Strip[],
): readonly Strip[] {
  const own = [...support, spanOf(line.stations.chainage)];
  return [
    ...asked.filter(
      (entry): entry is Strip => !("area" in entry) && (entry.group === undefined || entry.group === line.group),
    ),
    ...onMap.filter((strip) => partsOf(strip).some((part) => clip(part, own).length > 0)),
  ];
}

/** Of strips that lie, wholly or in part, where the source is zero by assumption. */
export function doubtsOfStrips(strips: readonly Strip[], support: Support): Notice[] {
  return strips.flatMap((strip) => {
    const whole = totalLength(partsOf(strip));
    const inside = partsOf(strip).reduce((sum, part) => sum + totalLength(clip(part, support)), 0);
    if (inside >= whole * (1 - 1e-9)) return [];
    const lies =
      inside > 0
        ? `lies off the support by ${Number((whole - inside).toPrecision(3))} of its ${Number(whole.toPrecision(4))} m`
        : "lies off the support";
    return [
      doubt(
        "strip/off-support",
        `Strip ${strip.name} (${strip.from}:${strip.to}) ${lies}, where the source is zero by assumption. Widen --support if the strip can hold sources.`,
      ),
    ];
  });
}
