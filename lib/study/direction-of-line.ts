/** The direction of the Earth's field along a line, where an observable asks for it. */
import {InputError} from "../errors.ts";
import {geomagneticDirection} from "../geometry/geomagnetic-field.ts";
import {trackDirection} from "../geometry/track-direction.ts";
import {type EffectiveDirection, effectiveDirection} from "../potential/effective-direction.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {Settings} from "./settings.ts";

/**
 * @param profile azimuth of the axis that the sources are square to; absent: that of the line
 * @returns undefined where no direction was given; who needs one then says so
 * @throws {InputError} `direction/no-azimuth`, `direction/no-position`, `direction/date`
 * @throws {ModelError} `direction/along-strike`
 */
export function effectiveDirectionOf(
  line: SurveyLine,
  {fieldDirection}: Pick<Settings, "fieldDirection">,
  profile?: number,
): EffectiveDirection | undefined {
  if (fieldDirection === undefined) return undefined;
  const {track} = line;
  if (track === undefined)
    throw new InputError(
      "direction/no-azimuth",
      `The direction of the field along line ${line.id} needs the azimuth of the line, and only its chainage is known. Give the columns of its coordinates and --crs.`,
      {place: {file: line.file}},
    );
  const {azimuth: own, middle} = trackDirection(track);
  const azimuth = profile ?? own;
  if (fieldDirection.kind === "angles")
    return effectiveDirection(fieldDirection.inclination, fieldDirection.declination, azimuth);
  if (middle === undefined)
    throw new InputError(
      "direction/no-position",
      `--date takes the field at the place of line ${line.id}, and the system of its coordinates is not known. Give --crs, or --inclination and --declination.`,
      {place: {file: line.file}},
    );
  const {inclination, declination} = geomagneticDirection(fieldDirection.date, ...middle);
  return effectiveDirection(inclination, declination, azimuth);
}
