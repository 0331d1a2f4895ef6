/** Computes lines of a survey by their place in it and keeps their parcels. Quickest when the places increase. */
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
}

export function benchFor({survey, settings, digest}: OpenedRun, parts: Parts): Bench {
  const answer = lineAnswers(settings);
  const recordAt = walker(survey);
  return {
    async compute(index) {
      const record = await recordAt(index);
      const outcome = answer(record);
      return parts.keep(index, outcome.id, outcome.status, digest, parcelOf(outcome, record));
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
