/**
 * Coordinate systems given as well-known text.
 *
 * Text whose outermost node carries an EPSG code is looked up by that code. Older text without
 * one (the .prj file beside many data sets) is read if its projection is among a few that were
 * compared with PROJ; its datum is then known by name only. proj4's own reader of WKT is not
 * used: the second edition of WKT makes it apply datum shifts from a table of its own, the
 * first does not, and the same system differs by metres between the two.
 */
import {InputError} from "../errors.ts";
import type {CoordinateSystem} from "./crs-definition.ts";
import type {Datum} from "./datum.ts";
import {epsgSystem} from "./epsg-lookup.ts";
import {projStringSystem} from "./proj-string.ts";

interface Node {
  readonly keyword: string;
  readonly values: readonly (string | number)[];
  readonly children: readonly Node[];
}

const refuse = (found: string, needed: string): InputError => new InputError("crs/bad-wkt", `WKT: ${found}. ${needed}`);

const INSTEAD = "Give the EPSG code or a PROJ string of the system instead.";
const DEEPEST = 20;

/** The tree that the text spells. */
function parse(text: string): Node {
  const tokens = text.match(/"(?:[^"]|"")*"|[[\](),]|[^\s[\](),"]+/g) ?? [];
  let at = 0;
  const node = (depth: number): Node => {
    if (depth > DEEPEST) throw refuse("it is nested too deeply", INSTEAD);
    const keyword = tokens[at++]!.toUpperCase();
    const opening = tokens[at++];
    if (opening !== "[" && opening !== "(") throw refuse(`"[" is missing after ${keyword}`, "Copy the text whole.");
    const values: (string | number)[] = [];
    const children: Node[] = [];
    for (;;) {
      const token = tokens[at];
      if (token === undefined) throw refuse("it ends too early", "Copy the text whole.");
      const next = tokens[at + 1];
      if (next === "[" || next === "(") children.push(node(depth + 1));
      else {
        if (token.startsWith('"')) values.push(token.slice(1, -1).replaceAll('""', '"'));
        else values.push(Number.isNaN(Number(token)) ? token : Number(token));
        ++at;
      }
      const after = tokens[at++];
      if (after === "]" || after === ")") return {keyword, values, children};
      if (after !== ",")
        throw refuse(`"${after ?? "the end"}" stands where "," or "]" was needed`, "Copy the text whole.");
    }
  };
  const root = node(0);
  if (at !== tokens.length) throw refuse("something follows its end", "Copy the text whole, and nothing else.");
  return root;
}

const child = (parent: Node | undefined, ...keywords: string[]): Node | undefined =>
  parent?.children.find((candidate) => keywords.includes(candidate.keyword));

/** The EPSG code that a node carries itself. */
function epsgCode(node: Node): number | undefined {
  const id = child(node, "AUTHORITY", "ID");
  if (id === undefined || String(id.values[0]).toUpperCase() !== "EPSG") return undefined;
  const code = Number(id.values[1]);
  return Number.isInteger(code) ? code : undefined;
}

/** WKT names of the projections that are read, lower case, and PROJ's. */
const PROJECTIONS: ReadonlyMap<string, string> = new Map([
  ["transverse_mercator", "tmerc"],
  ["gauss_kruger", "tmerc"],
  ["lambert_conformal_conic", "lcc"],
  ["lambert_conformal_conic_1sp", "lcc"],
  ["lambert_conformal_conic_2sp", "lcc"],
  ["albers", "aea"],
  ["albers_conic_equal_area", "aea"],
]);
const PARAMETERS: ReadonlyMap<string, string> = new Map([
  ["latitude_of_origin", "lat_0"],
  ["latitude_of_center", "lat_0"],
  ["central_meridian", "lon_0"],
  ["longitude_of_center", "lon_0"],
  ["standard_parallel_1", "lat_1"],
  ["standard_parallel_2", "lat_2"],
  ["scale_factor", "k_0"],
  ["false_easting", "x_0"],
  ["false_northing", "y_0"],
]);

const numberIn = (node: Node, index: number): number => {
  const value = node.values[index];
  if (typeof value !== "number" || !Number.isFinite(value))
    throw refuse(`${node.keyword} has no number where one was needed`, INSTEAD);
  return value;
};

/** The datum's words for a PROJ string, and its name. */
function datumWords(geographic: Node): {words: string[]; name: string} {
  const datum = child(geographic, "DATUM");
  const spheroid = child(datum, "SPHEROID", "ELLIPSOID");
  if (datum === undefined || spheroid === undefined) throw refuse("it names no datum with an ellipsoid", INSTEAD);
  const unit = child(geographic, "UNIT");
  if (unit !== undefined && !(Math.abs(numberIn(unit, 1) - Math.PI / 180) < 1e-10))
    throw refuse("its angles are not in degrees", INSTEAD);
  const a = numberIn(spheroid, 1);
  const rf = numberIn(spheroid, 2);
  const words = rf === 0 ? [`+R=${a}`] : [`+a=${a}`, `+rf=${rf}`];
  const meridian = child(geographic, "PRIMEM");
  if (meridian !== undefined && numberIn(meridian, 1) !== 0) words.push(`+pm=${numberIn(meridian, 1)}`);
  const shift = child(datum, "TOWGS84");
  if (shift !== undefined) words.push(`+towgs84=${shift.values.join(",")}`);
  return {words, name: String(datum.values[0])};
}

function projectionWords(root: Node): string[] {
  const named = String(child(root, "PROJECTION")?.values[0] ?? "");
  const projection = PROJECTIONS.get(named.toLowerCase());
  if (projection === undefined) throw refuse(`its projection "${named}" is not read here`, INSTEAD);
  if (child(root, "EXTENSION") !== undefined) throw refuse("it carries an extension", INSTEAD);
  for (const axis of root.children.filter((candidate) => candidate.keyword === "AXIS"))
    if (!/^(east|north)$/i.test(String(axis.values[1])))
      throw refuse(`its axis "${axis.values[0]}" points ${axis.values[1]}`, INSTEAD);
  const unit = child(root, "UNIT");
  if (unit === undefined) throw refuse("it has no linear unit", INSTEAD);
  const metres = numberIn(unit, 1);
  const parameters = new Map<string, number>();
  for (const parameter of root.children.filter((candidate) => candidate.keyword === "PARAMETER")) {
    const key = PARAMETERS.get(String(parameter.values[0]).toLowerCase());
    if (key === undefined) throw refuse(`its parameter "${parameter.values[0]}" is not read here`, INSTEAD);
    // False easting and northing are in the system's unit in WKT, in metres in PROJ.
    parameters.set(key, numberIn(parameter, 1) * (key === "x_0" || key === "y_0" ? metres : 1));
  }
  if (projection === "lcc" && !parameters.has("lat_1")) parameters.set("lat_1", parameters.get("lat_0") ?? 0);
  return [
    `+proj=${projection}`,
    ...[...parameters].map(([key, value]) => `+${key}=${value}`),
    ...(metres === 1 ? [] : [`+to_meter=${metres}`]),
  ];
}

/**
 * Reads well-known text.
 * @throws {InputError} `crs/bad-wkt`; and the codes of {@link epsgSystem} if the text carries an EPSG code
 */
export function wktSystem(text: string): CoordinateSystem {
  const root = parse(text);
  const projected = ["PROJCS", "PROJCRS", "PROJECTEDCRS"].includes(root.keyword);
  if (!projected && !["GEOGCS", "GEOGCRS", "GEOGRAPHICCRS", "GEODCRS", "GEODETICCRS"].includes(root.keyword))
    throw refuse(
      `${root.keyword} is no plain projected or longitude/latitude system`,
      "Compound, geocentric, vertical and bound systems are not taken: give the EPSG code or a PROJ string of the horizontal system.",
    );
  const title = String(root.values[0] ?? "");
  const code = epsgCode(root);
  if (code !== undefined) return epsgSystem(code);
  if (root.keyword !== "PROJCS" && root.keyword !== "GEOGCS")
    throw refuse("it carries no EPSG code, and is of the second edition", INSTEAD);
  const geographic = projected ? child(root, "GEOGCS") : root;
  if (geographic === undefined) throw refuse("it has no GEOGCS", INSTEAD);
  const {words, name} = datumWords(geographic);
  const system = projStringSystem([...(projected ? projectionWords(root) : ["+proj=longlat"]), ...words].join(" "));
  const datum: Datum = {...system.datum, id: `${name}, ${system.datum.id}`, name};
  return {...system, name: "WKT", title, datum};
}
