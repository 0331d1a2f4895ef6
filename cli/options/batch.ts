/** Options that say how the work on many lines is shared out. None of them changes a byte of the results. */

import {InputError} from "../../lib/errors.ts";
import {SHARD_PATTERN, type Shard, shardFrom} from "../batch/shard.ts";
import {queueAddress} from "../queue/address.ts";
import {FOLDER_PATTERN, type FolderMap, folderMapFrom} from "../queue/folder-map.ts";
import {type Asked, allOf, isOn, type OptionEntry, type OptionGroup, oneOf} from "./entry.ts";
import {type Need, numberFor} from "./number.ts";
import {QUIET} from "./output.ts";

const WORKERS: Need = {words: "a whole number from 1 to 1024", example: "4", least: 1, most: 1024, whole: true};

const SECONDS: Need = {words: "seconds above 0, at most a day", example: "30", above: 0, most: 86_400};
/** Also of whoever only looks into the queue. */
export const LOST_AFTER_S = 30;

const WORKERS_ENTRY: OptionEntry = {
  name: "workers",
  value: "N",
  form: {number: WORKERS},
  help: "lines computed at a time, each on a core of its own; the files are the same for any number",
  default: {value: "all cores", reason: "lines do not wait for each other; memory grows with the number"},
};
const QUEUE: OptionEntry = {
  name: "queue",
  value: "redis://HOST:PORT",
  commandLineOnly: true,
  help: "put the lines into this queue, from which any number of groundward worker take them; --out must be a folder that all of them see",
  default: {value: "none", reason: "one machine does the whole survey"},
};

export const SHARED_OUT: OptionGroup = {
  heading: "How the work is shared out",
  entries: [
    WORKERS_ENTRY,
    {
      name: "shard",
      value: "I/N",
      form: {pattern: SHARD_PATTERN},
      commandLineOnly: true,
      help: "compute every N-th line from the I-th on and write no files: groundward gather does, once every shard is done",
      default: {value: "none", reason: "one machine does the whole survey"},
    },
    QUEUE,
    {
      name: "detach",
      commandLineOnly: true,
      help: "put the lines into the queue and end; groundward gather writes the files once every line is done",
      default: {value: "off", reason: "whoever waits sees how far the work is and gets the files"},
    },
  ],
};

interface SharedOut {
  readonly workers: number | undefined;
  readonly shard: Shard | undefined;
  /** Address of a queue. */
  readonly queue: string | undefined;
}

/** @throws {InputError} `option/not-a-number`, `option/out-of-range`, `option/not-a-shard`, `queue/not-an-address` */
export function batchFrom(asked: Asked): SharedOut {
  const [workers, shard, queue] = [oneOf(asked, "workers"), oneOf(asked, "shard"), oneOf(asked, "queue")];
  if (queue !== undefined) queueAddress(queue);
  if (queue !== undefined && shard !== undefined)
    throw new InputError("option/two-shares", "--queue and --shard both share out the lines. Keep the one you mean.");
  if (queue === undefined && isOn(asked, "detach"))
    throw new InputError("option/no-queue", "--detach leaves the lines to a queue, but none is named. Give --queue.");
  return {
    workers: workers === undefined ? undefined : numberFor("--workers", workers, WORKERS),
    shard: shard === undefined ? undefined : shardFrom(shard),
    queue,
  };
}

/** For workers on a queue. */
export const SERVED: OptionGroup = {
  heading: "What is served",
  entries: [
    {...QUEUE, help: "queue to take lines from", required: "lines come from a queue"},
    WORKERS_ENTRY,
    {
      name: "folder",
      value: "FROM=TO",
      repeated: true,
      form: {pattern: FOLDER_PATTERN},
      help: "a folder that the submitting machine calls FROM is TO here",
      default: {value: "none", reason: "every machine sees the folders under the same name"},
    },
    {
      name: "idle",
      value: "SECONDS",
      form: {number: SECONDS},
      help: "end after so long without work",
      default: {value: "never", reason: "the next run may be submitted at any time"},
    },
    {
      name: "lost-after",
      value: "SECONDS",
      form: {number: SECONDS},
      help: "seconds of silence after which a line of this worker goes to another",
      default: {value: `${LOST_AFTER_S}`, reason: "longer than a network stumbles, however long a line takes"},
    },
    QUIET,
  ],
};

export interface Served {
  /** Address of the queue. */
  readonly queue: string;
  readonly workers: number | undefined;
  readonly folders: readonly FolderMap[];
  /** Seconds. */
  readonly idle: number;
  /** Seconds. */
  readonly lostAfter: number;
}

/** @throws {InputError} of the options */
export function servedFrom(asked: Asked): Served {
  const {queue, workers} = batchFrom(asked);
  if (queue === undefined)
    throw new InputError(
      "option/missing",
      "--queue is missing: there is nothing to take lines from. Give one, for example --queue redis://127.0.0.1:6379.",
    );
  const seconds = (name: string): number | undefined => {
    const text = oneOf(asked, name);
    return text === undefined ? undefined : numberFor(`--${name}`, text, SECONDS);
  };
  return {
    queue,
    workers,
    folders: allOf(asked, "folder").map(folderMapFrom),
    idle: seconds("idle") ?? Number.POSITIVE_INFINITY,
    lostAfter: seconds("lost-after") ?? LOST_AFTER_S,
  };
}
