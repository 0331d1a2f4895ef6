/** The outcome of one line as bytes, without the line itself: whoever opens the parcel has read the line again. */
import {OBSERVABLES} from "../../lib/potential/catalogue.ts";
import type {LineOutcome} from "../../lib/study/outcome.ts";
import type {LineRecord} from "../../lib/survey/survey.ts";
import {pack, type Roots, unpack} from "./pack.ts";

/** Raised when parcels change their form, so that older ones are computed again. */
export const PARCEL_FORM = 1;

const rootsOf = (record: LineRecord): Roots => ({
  record,
  observables: Object.fromEntries(OBSERVABLES.map((observable) => [observable.name, observable])),
});

export const parcelOf = (outcome: LineOutcome, record: LineRecord): Uint8Array => pack(outcome, rootsOf(record));

/** @param record of the same line, read again */
export const outcomeIn = (parcel: Uint8Array, record: LineRecord): LineOutcome =>
  unpack(parcel, rootsOf(record)) as LineOutcome;
