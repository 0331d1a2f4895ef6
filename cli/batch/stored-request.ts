/** What a run was asked, as plain data: enough to begin it again in another thread, process or place. */
import type {FileDigest} from "../../lib/products/record.ts";
import type {Host} from "../nouns.ts";
import type {Asked} from "../options/entry.ts";
import type {Request} from "../request.ts";

export interface StoredRequest {
  /** Options and, as `survey`, the files; paths as they were typed. */
  readonly asked: readonly (readonly [string, readonly string[]])[];
  /** The job file that options came from; they stand in `asked`. */
  readonly job: FileDigest | null;
  /** Where paths start from. */
  readonly folder: string;
}

/** How the work is shared out is of no matter to the lines, and an address may hold a password. */
const LEFT_OUT: readonly string[] = ["queue", "detach", "lost-after"];

export const storedRequest = ({asked, job}: Request, {folder}: Host): StoredRequest => ({
  asked: [...asked].filter(([name]) => !LEFT_OUT.includes(name)),
  job: job?.digest ?? null,
  folder,
});

export const askedIn = ({asked}: StoredRequest): Asked => new Map(asked);

/** The machine as it looks from `folder`: files keep the names that were typed, since those get into messages. */
export const hostAt = (host: Host, folder: string): Host => ({
  ...host,
  folder,
  openInput: async (path) => ({...(await host.openInput(host.beside(`${folder}/-`, path))), name: path}),
});
