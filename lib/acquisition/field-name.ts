/** What the name of a column says, where a definition beside the table says more than the name. */
import {definedUnit} from "./definition-units.ts";
import {type HeaderName, headerName, ROLE_NAMES, VALUE_NAMES} from "./header-names.ts";

const KNOWN: ReadonlySet<string> = new Set([...Object.values(ROLE_NAMES), ...Object.values(VALUE_NAMES)].flat());

/**
 * The long name speaks where the name itself says nothing. The defined unit goes before the one in the
 * name, and a column called east or north in degrees is a longitude or a latitude: such columns occur
 * beside eastings in metres.
 * @param longName, unit as defined; undefined where nothing is
 */
export function fieldName(name: string, longName: string | undefined, unit: string | undefined): HeaderName {
  const short = headerName(name);
  const long = longName === undefined ? short : headerName(longName);
  const spoken = !KNOWN.has(short.key) && KNOWN.has(long.key) ? long : short;
  if (unit === undefined) return spoken;
  const defined = definedUnit(unit);
  if (defined !== "deg") return {key: spoken.key, unit: defined?.toLowerCase()};
  const key = ROLE_NAMES.x.includes(spoken.key)
    ? "longitude"
    : ROLE_NAMES.y.includes(spoken.key)
      ? "latitude"
      : spoken.key;
  return {key, unit: "deg"};
}
