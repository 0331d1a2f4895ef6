/**
 * The coordinate system of a GeoTIFF's keys.
 *
 * A grid whose system is not known can still be used: its lines need only the length of a
 * map unit. Source of the codes: OGC 19-008r4, GeoTIFF 1.1, annex on key values.
 */
import {ReportableError} from "../errors.ts";
import {doubt, type Notice} from "../notice.ts";
import {coordinateSystem} from "./coordinate-system.ts";
import type {CoordinateSystem} from "./crs-definition.ts";

/** The keys that are read, by their names in the standard. */
export interface GeoKeys {
  /** 1 projected, 2 geographic, 3 geocentric. */
  readonly GTModelTypeGeoKey?: number;
  readonly ProjectedCSTypeGeoKey?: number;
  readonly GeographicTypeGeoKey?: number;
  readonly ProjLinearUnitsGeoKey?: number;
  readonly ProjLinearUnitSizeGeoKey?: number;
  readonly GTCitationGeoKey?: string;
  readonly PCSCitationGeoKey?: string;
}

export interface GridSystem {
  /** Absent if the keys name none that is known here. */
  readonly system?: CoordinateSystem;
  /** Metres in one map unit; absent for degrees, and where it is not known. */
  readonly metresPerUnit?: number;
  readonly notices: readonly Notice[];
}

const USER_DEFINED = 32767;
const LINEAR_UNITS: ReadonlyMap<number, number> = new Map([
  [9001, 1],
  [9002, 0.3048],
  [9003, 1200 / 3937],
  [9036, 1000],
]);

/** Metres in the unit that the keys state, if they do. */
function statedUnit(keys: GeoKeys): number | undefined {
  const code = keys.ProjLinearUnitsGeoKey;
  const size = keys.ProjLinearUnitSizeGeoKey;
  if (code === USER_DEFINED) return size !== undefined && size > 0 ? size : undefined;
  return code === undefined ? undefined : LINEAR_UNITS.get(code);
}

/**
 * Reads the system that the keys name.
 * Never throws on keys that it cannot use: it says why in a doubt, and the caller asks for `--crs` if it needs more.
 */
export function crsFromGeoKeys(keys: GeoKeys): GridSystem {
  const unit = statedUnit(keys);
  const model = keys.GTModelTypeGeoKey;
  const known = (code: number | undefined): code is number => code !== undefined && code > 0 && code !== USER_DEFINED;
  const code = model === 2 ? keys.GeographicTypeGeoKey : keys.ProjectedCSTypeGeoKey;
  const called = keys.PCSCitationGeoKey ?? keys.GTCitationGeoKey;
  let why =
    called === undefined ? "it names no system by code" : `it describes its own system ("${called.slice(0, 80)}")`;
  if (model === 3) why = "it is geocentric";
  else if (known(code)) {
    try {
      const system = coordinateSystem(`EPSG:${code}`);
      const own = system.metresPerUnit;
      const notices =
        unit !== undefined && own !== undefined && Math.abs(unit / own - 1) > 1e-7
          ? [
              doubt(
                "crs/grid-unit-differs",
                `The grid's keys state a map unit of ${unit} m, but ${system.name} (${system.title}) counts in units of ${own} m. ` +
                  `The system's unit is taken. If it is wrong, rewrite the grid's keys.`,
              ),
            ]
          : [];
      return own === undefined ? {system, notices} : {system, metresPerUnit: own, notices};
    } catch (cause) {
      if (!(cause instanceof ReportableError)) throw cause;
      why = cause.message;
    }
  }
  const consequence =
    unit === undefined
      ? model === 2 || model === 3
        ? "Its lines cannot be measured in metres: give --crs, or reproject it to metres."
        : "A map unit of one metre is not certain: give --crs."
      : `Its map unit of ${unit} m is used, and longitude and latitude are not known.`;
  const notice = doubt("crs/grid-system-unknown", `The grid's coordinate system is not known: ${why}. ${consequence}`);
  return unit === undefined || model === 2 || model === 3
    ? {notices: [notice]}
    : {metresPerUnit: unit, notices: [notice]};
}
