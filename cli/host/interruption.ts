import type {Interruptible} from "../nouns.ts";

/** What a signal has to undo before the process ends, and whether it must wait for a moment that may not be cut. */
export interface Interruption {
  readonly undo: Set<() => void>;
  held: boolean;
  pending: boolean;
  /** Work that can come to an end by itself. */
  soft: Interruptible | undefined;
}
