/** Which files belong together: lines.dfn, lines.dat and, where there are, lines.des and lines.prj. */
import {InputError} from "../errors.ts";
import type {Gdf2Files} from "../formats/aseg-gdf2-read.ts";
import type {ByteSource} from "../formats/byte-source.ts";

/** By the ends of their names; a list that a shell made of lines.* holds all of them. */
const COMPANIONS = ["dat", "des", "prj", "met"];

function parts(name: string): {readonly base: string; readonly end: string} {
  const found = /^(.*)\.([^./\\]*)$/s.exec(name);
  return found === null ? {base: name, end: ""} : {base: found[1]!, end: found[2]!.toLowerCase()};
}

/** Whether a file is a definition, or stands in the list beside its definition. */
export function isGdf2(name: string, names: readonly string[]): boolean {
  const {base, end} = parts(name);
  if (end === "dfn") return true;
  if (!COMPANIONS.includes(end)) return false;
  return names.some((other) => parts(other).base === base && parts(other).end === "dfn");
}

/**
 * One entry a definition, in the order of the list.
 * @throws {InputError} `gdf2/no-data`
 */
export function gdf2Pairs(files: readonly ByteSource[]): Gdf2Files[] {
  return files
    .filter(({name}) => parts(name).end === "dfn")
    .map((definition) => {
      const {base} = parts(definition.name);
      const beside = (end: string) => files.find(({name}) => parts(name).base === base && parts(name).end === end);
      const data = beside("dat");
      if (data === undefined)
        throw new InputError(
          "gdf2/no-data",
          `${definition.name} defines columns, but there is no ${base}.dat with the rows. Put it beside the definition, under that name.`,
          {place: {file: definition.name}},
        );
      return {definition, data, description: beside("des"), projection: beside("prj")};
    });
}
