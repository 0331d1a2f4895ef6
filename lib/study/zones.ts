/** Polygons of the map on a line: which of its chainages lie inside those that were asked about. */
import {InputError} from "../errors.ts";
import {coordinateSystem} from "../geometry/coordinate-system.ts";
import type {CoordinateSystem} from "../geometry/crs-definition.ts";
import type {Support} from "../geometry/interval.ts";
import {type MapArea, projectedPolygons} from "../geometry/map-area.ts";
import type {Polygon} from "../geometry/polygon.ts";
import {partsInside, type Track} from "../geometry/track.ts";
import {type Transformation, transformation} from "../geometry/transformation.ts";
import type {Strip} from "../inverse/nouns.ts";
import {type Notice, standingDoubt} from "../notice.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {Settings} from "./settings.ts";

export interface LineZones {
  /** Inside the polygons of the support, also beyond the ends of the line; undefined where none was asked. */
  readonly support: Support | undefined;
  /** Polygon strips that the line meets. */
  readonly strips: readonly Strip[];
  readonly notices: readonly Notice[];
}

export type ZonesOf = (line: SurveyLine) => LineZones;

const WGS84 = "EPSG:4326";

/**
 * The zones of each line of a survey. Polygons are brought to the system of the lines once for all lines that share it.
 * @throws {InputError} from the function returned: `zone/no-coordinates`, `zone/no-crs`, and those of the transformation
 */
export function zonesFor({model, wanted}: Pick<Settings, "model" | "wanted">): ZonesOf {
  const areas = model.support.flatMap((entry) => ("area" in entry ? [entry.area] : []));
  const strips = wanted.strips.flatMap((entry) => ("area" in entry ? [entry] : []));
  const [example] = [...areas, ...strips.map(({area}) => area)];
  if (example === undefined) return () => ({support: undefined, strips: [], notices: []});
  // Lines of one survey share one system, or one a group: few.
  const known = new Map<CoordinateSystem, {way: Transformation; polygons: Map<MapArea, Polygon[]>}>();
  const inSystem = (system: CoordinateSystem) => {
    const found = known.get(system);
    if (found !== undefined) return found;
    const made = {way: transformation(coordinateSystem(WGS84), system), polygons: new Map<MapArea, Polygon[]>()};
    known.set(system, made);
    return made;
  };
  return (line) => {
    const {track, system} = trackOf(line, example);
    const {way, polygons} = inSystem(system);
    const polygonsOf = (area: MapArea): Polygon[] => {
      const found = polygons.get(area) ?? projectedPolygons(area, way);
      polygons.set(area, found);
      return found;
    };
    return {
      support: areas.length === 0 ? undefined : partsInside(track, areas.flatMap(polygonsOf)),
      strips: strips.flatMap(({name, area}): Strip[] => {
        const parts = partsInside(track, polygonsOf(area));
        if (parts.length === 0) return [];
        return [{name, from: parts[0].from, to: parts[parts.length - 1].to, group: undefined, parts}];
      }),
      notices: way.notices.length === 0 ? [] : [takenAsOne(system)],
    };
  };
}

const takenAsOne = (system: CoordinateSystem): Notice =>
  standingDoubt(
    "zone/datums-taken-as-one",
    `Polygons are on WGS 84, the lines on "${system.datum.name}"; the two are taken as one, so that edges of support and strips may be off by up to about 2 m.`,
  );

function trackOf({track, id, file}: SurveyLine, {words}: MapArea): {track: Track; system: CoordinateSystem} {
  if (track === undefined)
    throw new InputError(
      "zone/no-coordinates",
      `${words} is a polygon of the map, but line ${id} is known by its chainage only. Give the columns of its coordinates with --column and their system with --crs, or intervals A:B of chainage.`,
      {place: {file}},
    );
  if (track.system === undefined)
    throw new InputError(
      "zone/no-crs",
      `${words} gives longitude and latitude, but the system of x, y of line ${id} is not known. Give it with --crs EPSG:n.`,
      {place: {file}},
    );
  return {track, system: track.system};
}
