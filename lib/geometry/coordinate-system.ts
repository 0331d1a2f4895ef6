/**
 * The coordinate system that a user names: an EPSG code, a PROJ string, or WKT.
 *
 * Geometry is done in the data's own projected system; longitude and latitude go to a
 * projection of their own (own-mercator.ts).
 */
import {InputError} from "../errors.ts";
import type {CoordinateSystem} from "./crs-definition.ts";
import {epsgSystem} from "./epsg-lookup.ts";
import {projStringSystem} from "./proj-string.ts";
import {wktSystem} from "./wkt.ts";

/**
 * Reads the name or the definition of a coordinate system.
 * @param name "EPSG:n", a PROJ string ("+proj=…"), or WKT
 * @throws {InputError} `crs/unknown-name` for anything else, and the codes of {@link epsgSystem},
 *   {@link projStringSystem} and {@link wktSystem}
 */
export function coordinateSystem(name: string): CoordinateSystem {
  const text = name.trim();
  const code = /^EPSG:{1,2}(\d{1,6})$/i.exec(text)?.[1];
  if (code !== undefined) return epsgSystem(Number(code));
  if (/^\+/.test(text)) return projStringSystem(text);
  if (/^[A-Z_0-9]+\s*[[(]/i.test(text)) return wktSystem(text);
  const shown = text.length > 60 ? `${text.slice(0, 60)}…` : text;
  throw new InputError(
    "crs/unknown-name",
    /^\d+$/.test(text)
      ? `"${shown}" is no coordinate system. If it is an EPSG code, write EPSG:${shown}.`
      : `"${shown}" is no coordinate system. Give an EPSG code such as EPSG:32633, a PROJ string that begins with "+proj=", or WKT.`,
  );
}
