/** The direction of the Earth's main field by the World Magnetic Model (NCEI and BGS), through the library `geomagnetism`. */
import geomagnetism from "geomagnetism";
import {InputError} from "../errors.ts";

export interface FieldDirection {
  /** Degrees below the horizon. */
  readonly inclination: number;
  /** Degrees clockwise from true north. */
  readonly declination: number;
}

/** First and last day whose midnight (UTC) the library's models (WMM2015 to WMM2025) cover. */
const FROM = "2014-12-16";
const TO = "2029-11-13";

/**
 * At the ellipsoid; a kilometre of height turns the direction by less than a hundredth of a degree.
 *
 * @param date YYYY-MM-DD
 * @throws {InputError} `direction/date` for a date that is none or outside the models
 */
export function geomagneticDirection(date: string, longitude: number, latitude: number): FieldDirection {
  const day = new Date(`${date}T00:00:00Z`);
  // Written back, since 2026-02-30 is read as the second of March.
  if (Number.isNaN(day.getTime()) || day.toISOString().slice(0, 10) !== date)
    throw new InputError("direction/date", `--date ${date} is not a date. Give YYYY-MM-DD, the day of the survey.`);
  if (date < FROM || date > TO)
    throw new InputError(
      "direction/date",
      `--date ${date} lies outside the World Magnetic Models at hand (${FROM} to ${TO}). Give --inclination and --declination from a reference field of that day.`,
    );
  const {incl, decl} = geomagnetism.model(day).point([latitude, longitude]);
  return {inclination: incl, declination: decl};
}
