/** Options that say how the work on many lines is shared out. None of them changes a byte of the results. */
import {SHARD_PATTERN, type Shard, shardFrom} from "../batch/shard.ts";
import {type Asked, type OptionGroup, oneOf} from "./entry.ts";
import {type Need, numberFor} from "./number.ts";

const WORKERS: Need = {words: "a whole number from 1 to 1024", example: "4", least: 1, most: 1024, whole: true};

export const SHARED_OUT: OptionGroup = {
  heading: "How the work is shared out",
  entries: [
    {
      name: "workers",
      value: "N",
      form: {number: WORKERS},
      help: "lines computed at a time, each on a core of its own; the files are the same for any number",
      default: {value: "all cores", reason: "lines do not wait for each other; memory grows with the number"},
    },
    {
      name: "shard",
      value: "I/N",
      form: {pattern: SHARD_PATTERN},
      commandLineOnly: true,
      help: "compute every N-th line from the I-th on and write no files: groundward gather does, once every shard is done",
      default: {value: "none", reason: "one machine does the whole survey"},
    },
  ],
};

/** @throws {InputError} `option/not-a-number`, `option/out-of-range`, `option/not-a-shard` */
export function batchFrom(asked: Asked): {readonly workers: number | undefined; readonly shard: Shard | undefined} {
  const [workers, shard] = [oneOf(asked, "workers"), oneOf(asked, "shard")];
  return {
    workers: workers === undefined ? undefined : numberFor("--workers", workers, WORKERS),
    shard: shard === undefined ? undefined : shardFrom(shard),
  };
}
