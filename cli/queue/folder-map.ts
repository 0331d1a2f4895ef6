/** Folders that another machine sees under another name. */
import {InputError} from "../../lib/errors.ts";
import type {Host} from "../nouns.ts";
import {shown} from "../printable.ts";

export interface FolderMap {
  readonly from: string;
  readonly to: string;
}

/** Source of a regular expression. */
export const FOLDER_PATTERN = ".+=.+";

/** @throws {InputError} `option/not-a-folder-map` */
export function folderMapFrom(text: string): FolderMap {
  const [, from, to] = /^([^=]+)=(.+)$/.exec(text) ?? [];
  if (from !== undefined && to !== undefined) return {from: withoutSlash(from), to: withoutSlash(to)};
  throw new InputError(
    "option/not-a-folder-map",
    `--folder ${shown(text)} does not say what is where. Give FROM=TO, for example --folder /data/survey=/mnt/survey.`,
  );
}

const withoutSlash = (path: string): string => path.replace(/(?<=.)\/+$/, "");

/** `path` as it is called here; the first map that holds it counts. */
function mapped(path: string, maps: readonly FolderMap[]): string {
  const map = maps.find(({from}) => path === from || path.startsWith(from === "/" ? from : `${from}/`));
  return map === undefined ? path : `${map.to}${path.slice(map.from === "/" ? 0 : map.from.length)}`;
}

/** The machine, where files and parcels are looked for under mapped names and told under those that were given. */
export const mappedHost = (host: Host, maps: readonly FolderMap[]): Host => ({
  ...host,
  openInput: async (path) => ({...(await host.openInput(mapped(path, maps))), name: path}),
  openStore: (path) => host.openStore(mapped(path, maps)),
});
