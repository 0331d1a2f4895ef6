/** The strips that a line answers for. */
import {clip, type Support} from "../geometry/interval.ts";
import {partsOf, type Strip} from "../inverse/nouns.ts";
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
