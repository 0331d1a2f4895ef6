/** Which lines a shard computes: every n-th, so that shards end at about the same time. */
import {InputError} from "../../lib/errors.ts";
import {shown} from "../printable.ts";

/** Part i of n, both from one. */
export interface Shard {
  readonly part: number;
  readonly of: number;
}

/** Source of a regular expression. */
export const SHARD_PATTERN = "[0-9]{1,6}/[0-9]{1,6}";

/** @throws {InputError} `option/not-a-shard` */
export function shardFrom(text: string): Shard {
  const [part, of] = text.split("/").map(Number);
  if (new RegExp(`^${SHARD_PATTERN}$`).test(text) && part! >= 1 && part! <= of!) return {part: part!, of: of!};
  throw new InputError(
    "option/not-a-shard",
    `--shard ${shown(text)} is not a part of a whole. Give i/n with i from 1 to n, for example --shard 2/8.`,
  );
}

/** Places among `lines`, from zero. */
export const placesOf = ({part, of}: Shard, lines: number): readonly number[] =>
  Array.from({length: Math.max(0, Math.ceil((lines - part + 1) / of))}, (_, k) => part - 1 + k * of);
