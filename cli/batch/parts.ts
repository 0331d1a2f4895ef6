/**
 * The hidden folder inside `--out` that keeps the finished lines of a run: the request, one parcel a line, and journals
 * that say which parcel belongs to which line. A line counts as finished when a journal and its parcel agree.
 */
import {createHash} from "node:crypto";
import type {LineOutcome} from "../../lib/study/outcome.ts";
import type {Host} from "../nouns.ts";
import {PARTS} from "../own-names.ts";
import type {WholeIdentity} from "./opened-run.ts";
import {PARCEL_FORM} from "./parcel.ts";
import type {StoredRequest} from "./stored-request.ts";

const REQUEST = "request.json";
const JOURNAL = /^journal-.*\.ndjson$/;
const encoder = new TextEncoder();
const decoder = new TextDecoder();

/** One finished line, as a journal has it. */
export interface LineNote {
  /** Place in the survey, from zero. */
  readonly index: number;
  readonly line: string;
  readonly status: LineOutcome["status"];
  /** Digest of settings, inputs and program. */
  readonly run: string;
  readonly parcel: {readonly sha256: string; readonly bytes: number};
}

export interface PartsHead {
  readonly form: number;
  readonly request: StoredRequest;
  readonly identity: WholeIdentity;
  /** Digest of the identity. */
  readonly run: string;
  readonly lines: number;
}

export interface Parts {
  /** As users see it. */
  readonly path: string;
  /** Undefined where no run was begun, or by a program of another form. */
  head(): Promise<PartsHead | undefined>;
  begin(head: Omit<PartsHead, "form">): Promise<void>;
  /** Puts a parcel on the disk; it counts once its note is written too. */
  keep(index: number, line: string, status: LineOutcome["status"], run: string, parcel: Uint8Array): Promise<LineNote>;
  note(note: LineNote): Promise<void>;
  /** The last note of every line of this run; parcels are not looked at. */
  notes(run: string): Promise<ReadonlyMap<number, LineNote>>;
  /** The parcel of a note; undefined where it is missing or not the one that was written. */
  parcel(note: LineNote): Promise<Uint8Array | undefined>;
  dispose(): Promise<void>;
}

const parcelName = (index: number): string => `line-${index}.parcel`;
const digestOf = (bytes: Uint8Array): string => createHash("sha256").update(bytes).digest("hex");

/** The object in a text; undefined where a crash cut it. */
function parsed(text: string): Record<string, unknown> | undefined {
  try {
    const value: unknown = JSON.parse(text);
    return typeof value === "object" && value !== null ? (value as Record<string, unknown>) : undefined;
  } catch {
    return undefined;
  }
}

/** @param out the folder of the run */
export function openParts(host: Host, out: string): Parts {
  const path = `${out}/${PARTS}`;
  const store = host.openStore(path);
  const {pid, machine} = host.self;
  const journal = `journal-${machine.replaceAll(/[^A-Za-z0-9.-]/g, "_")}-${pid}.ndjson`;
  return {
    path,
    async head() {
      const bytes = await store.read(REQUEST);
      const head = bytes && parsed(decoder.decode(bytes));
      return head?.["form"] === PARCEL_FORM ? (head as unknown as PartsHead) : undefined;
    },
    begin: (head) => store.writeWhole(REQUEST, encoder.encode(JSON.stringify({form: PARCEL_FORM, ...head}))),
    async keep(index, line, status, run, parcel) {
      await store.writeWhole(parcelName(index), parcel);
      return {index, line, status, run, parcel: {sha256: digestOf(parcel), bytes: parcel.length}};
    },
    // A line break in front too: what a crash cut off spoils no other record.
    note: (note) => store.append(journal, encoder.encode(`\n${JSON.stringify(note)}\n`)),
    async notes(run) {
      const notes = new Map<number, LineNote>();
      for (const name of await store.list()) {
        if (!JOURNAL.test(name)) continue;
        for (const text of decoder.decode(await store.read(name)).split("\n")) {
          const note = text === "" ? undefined : (parsed(text) as unknown as LineNote | undefined);
          if (note?.run === run) notes.set(note.index, note);
        }
      }
      return notes;
    },
    async parcel({index, parcel}) {
      const bytes = await store.read(parcelName(index));
      return bytes !== undefined && digestOf(bytes) === parcel.sha256 ? bytes : undefined;
    },
    dispose: () => store.dispose(),
  };
}
