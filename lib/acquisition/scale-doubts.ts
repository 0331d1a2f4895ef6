/** Whether distances in the data's own projected system are true enough to work with. */
import {type CoordinateSystem, geographicOf} from "../geometry/crs-definition.ts";
import {largestScaleError} from "../geometry/projection-scale.ts";
import {transformation} from "../geometry/transformation.ts";
import {doubt, type Notice} from "../notice.ts";

/** Depths scale with distances; two parts in a thousand are more than a Transverse Mercator zone has (heuristic). */
const DOUBTFUL_SCALE = 2e-3;

/** @param places x, y in the unit of the system */
export function scaleDoubts(system: CoordinateSystem, places: readonly (readonly [number, number])[]): Notice[] {
  if (places.length === 0) return [];
  const back = transformation(system, geographicOf(system));
  const degrees = places.map(([x, y]) => back.apply(x, y));
  const error = largestScaleError(
    system,
    degrees.map(([longitude]) => longitude),
    degrees.map(([, latitude]) => latitude),
  );
  if (error <= DOUBTFUL_SCALE) return [];
  return [
    doubt(
      "crs/scale",
      `Distances in ${system.name} (${system.title}) are up to ${(100 * error).toPrecision(2)} % off here, and depths with them. Bring the data to a projection made for the area, or give longitude and latitude.`,
    ),
  ];
}
