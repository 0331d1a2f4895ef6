/** Computes lines of a survey by their place in it and keeps their parcels. Quickest when the places increase. */
import type {ReportableError} from "../../lib/errors.ts";
import type {LineOutcome} from "../../lib/study/outcome.ts";
import {lineAnswers} from "../../lib/study/survey-study.ts";
import type {LineRecord, Survey} from "../../lib/survey/survey.ts";
import type {OpenedRun} from "./opened-run.ts";
import {parcelOf} from "./parcel.ts";
import type {LineNote, Parts} from "./parts.ts";

export interface Bench {
  /**
   * @returns what the journal is to be told
   * @throws {ReportableError} for what is wrong with every line
   */
  compute(index: number): Promise<LineNote>;
  /** A line that is answered by a failure without being computed. */
  giveUp(index: number, failure: ReportableError): Promise<LineNote>;
}

export function benchFor({survey, settings, digest}: OpenedRun, parts: Parts): Bench {
  const answer = lineAnswers(settings);
  const recordAt = walker(survey);
  const keep = (index: number, record: LineRecord, outcome: LineOutcome): Promise<LineNote> =>
    parts.keep(index, outcome.id, outcome.status, digest, parcelOf(outcome, record));
  return {
    async compute(index) {
      const record = await recordAt(index);
      return keep(index, record, answer(record));
    },
    async giveUp(index, failure) {
      const record = await recordAt(index);
      return keep(index, record, {status: "failed", id: "line" in record ? record.line.id : record.id, failure});
    },
  };
}

/** Lines by their place: onwards from the last one, or from the beginning again. */
function walker(survey: Survey): (index: number) => Promise<LineRecord> {
  let walk: AsyncIterator<LineRecord> | undefined;
  let next = 0;
  return async (index) => {
    if (walk === undefined || index < next) {
      await walk?.return?.();
      walk = survey.lines()[Symbol.asyncIterator]();
      next = 0;
    }
    for (;;) {
      const {value, done} = await walk.next();
      if (done) throw new Error(`the survey has no line ${index}`);
      if (next++ === index) return value;
    }
  };
}
