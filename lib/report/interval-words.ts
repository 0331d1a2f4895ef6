/** What an interval is called, and what a simultaneous one promises; said wherever intervals are described. */
import type {IntervalKind} from "../inverse/interval-kind.ts";

const NOUN: Readonly<Record<IntervalKind, string>> = {single: "interval", simultaneous: "simultaneous band"};

export const intervalNoun = (kind: IntervalKind = "single"): string => NOUN[kind];

/** What stands before the words on what an interval rests on; nothing where each covers by itself. */
export const jointPromise = (kind: IntervalKind | undefined, percent: string): string =>
  kind === "simultaneous" ? `Simultaneous band: holds for all numbers of the line at once at ${percent}. ` : "";
