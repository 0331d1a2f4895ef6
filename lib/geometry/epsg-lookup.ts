/** Coordinate systems by EPSG code, looked up in the table that was checked against PROJ. */
import {InputError} from "../errors.ts";
import {type CoordinateSystem, geographicDefinition, projectionDefinition} from "./crs-definition.ts";
import type {Datum} from "./datum.ts";
import {DATUMS, GEOGRAPHIC, PROJECTED, REFUSED} from "./epsg-table.ts";

/** The fields of a row after its code, or undefined. */
function row(table: string, code: number): readonly string[] | undefined {
  const key = `\n${code}|`;
  const start = table.indexOf(key);
  if (start < 0) return undefined;
  const from = start + key.length;
  return table.slice(from, table.indexOf("\n", from)).split("|");
}

const advice =
  `Give the code of the system that the coordinates are in (a projected or a longitude/latitude system), ` +
  `or its definition as a PROJ string such as "+proj=tmerc +lat_0=0 +lon_0=15 +k=0.9996 +x_0=500000 +ellps=GRS80".`;

/** A datum by its EPSG code; only codes that the table's own rows name are asked for. */
export function epsgDatum(code: number): Datum {
  const fields = row(DATUMS, code);
  if (fields === undefined) throw new Error(`datum ${code} is missing from the table of datums`);
  const [name, semiMajorAxis, inverseFlattening, primeMeridian, near] = fields;
  return {
    id: `EPSG:${code}`,
    name: name!,
    ellipsoid: {semiMajorAxis: Number(semiMajorAxis), inverseFlattening: Number(inverseFlattening)},
    primeMeridian: Number(primeMeridian),
    nearWgs84: near === "near",
  };
}

/**
 * The coordinate system of an EPSG code.
 * @throws {InputError} `crs/unknown-code`; `crs/unsupported-code` where proj4 and PROJ do not agree;
 *   `crs/not-degrees` for longitude and latitude in grads
 */
export function epsgSystem(code: number): CoordinateSystem {
  const name = `EPSG:${code}`;
  const projected = row(PROJECTED, code);
  if (projected !== undefined) {
    const [title, base, words] = projected as [string, string, string];
    const datum = epsgDatum(Number(row(GEOGRAPHIC, Number(base))![1]));
    const metresPerUnit = Number(/ to_meter=(\S+)/.exec(words)?.[1] ?? 1);
    const definition = projectionDefinition(words.split(" "), datum);
    return {name, title, kind: "projected", metresPerUnit, datum, definition, notices: []};
  }
  const geographic = row(GEOGRAPHIC, code);
  if (geographic !== undefined) {
    const [title, datumCode, unit] = geographic as [string, string, string];
    if (unit !== "")
      throw new InputError(
        "crs/not-degrees",
        `${name} (${title}) counts longitude and latitude in grads; degrees were needed. Convert the coordinates to degrees (1 grad = 0.9°) and give the system of those.`,
      );
    const datum = epsgDatum(Number(datumCode));
    return {name, title, kind: "geographic", datum, definition: geographicDefinition(datum), notices: []};
  }
  const reason = REFUSED.split("\n").find((line) => line.split("|")[1]?.split(" ").includes(String(code)));
  if (reason !== undefined)
    throw new InputError(
      "crs/unsupported-code",
      `${name} is a system that cannot be relied on here (${reason.split("|")[0]}). ` +
        `Transform the coordinates beforehand with a tool you trust, to a UTM zone for example.`,
    );
  throw new InputError(
    "crs/unknown-code",
    `${name} is not in the table of coordinate systems: it does not exist, is withdrawn, or is vertical, compound, geocentric or three-dimensional. ${advice}`,
  );
}
