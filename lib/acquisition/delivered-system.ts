/** The coordinate system of the delivered x, y, where it is known. */
import {coordinateSystem} from "../geometry/coordinate-system.ts";
import type {CoordinateSystem} from "../geometry/crs-definition.ts";
import type {Survey} from "../survey/survey.ts";
import type {AcquisitionSettings} from "./settings.ts";

/**
 * That of the settings; of longitude and latitude without one WGS 84, as `frames.ts` takes them.
 * @throws {InputError} those of the coordinate systems
 */
export function deliveredSystem(
  {choices}: Pick<Survey, "choices">,
  {crs, outCrs}: Pick<AcquisitionSettings, "crs" | "outCrs">,
): CoordinateSystem | undefined {
  const asked = outCrs ?? crs ?? (choices.some(({role}) => role === "longitude") ? "EPSG:4326" : undefined);
  return asked === undefined ? undefined : coordinateSystem(asked);
}
