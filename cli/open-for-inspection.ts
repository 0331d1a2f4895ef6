/**
 * A survey opened to be looked at only. What a continuation needs and a look does not, an observable,
 * a noise and a height, is filled in where it was not given, and said so.
 */
import {openSurvey} from "../lib/acquisition/catalogue.ts";
import type {AcquisitionSettings} from "../lib/acquisition/settings.ts";
import {InputError} from "../lib/errors.ts";
import type {ByteSource} from "../lib/formats/byte-source.ts";
import {OBSERVABLES} from "../lib/potential/catalogue.ts";
import {DELIVERY_UNIT, UNITS} from "../lib/quantities.ts";
import type {Survey} from "../lib/survey/survey.ts";

export interface Opened {
  readonly survey: Survey;
  /** What was filled in, one sentence each. */
  readonly filledIn: readonly string[];
  readonly known: Known;
}

/** Whether what is shown is known, or only stands in for what is missing and means nothing. */
export interface Known {
  readonly heights: boolean;
  /** With it the unit of the readings. */
  readonly observable: boolean;
}

/** An inspection shows the noise of the record and never uses the one given; a grid must have one. */
const ANY_NOISE = 1;

/** @throws {InputError} of the acquisition, when no filling-in helps */
export async function openForInspection(files: ByteSource[], settings: AcquisitionSettings): Promise<Opened> {
  const [channel] = settings.channels;
  if (channel !== undefined)
    return withHeight(files, {...settings, channels: [{...channel, noise: channel.noise ?? ANY_NOISE}]});
  // Each observable knows other names of columns and other limits of an anomaly: the first that reads the files serves.
  const found: Opened[] = [];
  const refusals: InputError[] = [];
  for (const {name} of OBSERVABLES)
    try {
      const channels = [{role: "value", observable: name, unit: undefined, noise: ANY_NOISE}];
      const opened = await withHeight(files, {...settings, channels});
      const known = {...opened.known, observable: false};
      found.push({...opened, known, filledIn: [noObservable(opened.survey), ...opened.filledIn]});
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      refusals.push(error);
    }
  const contradicted = ({survey}: Opened): boolean => survey.notices.some(({code}) => UNIT_DOUBTS.has(code));
  const best = found.find((opened) => !contradicted(opened)) ?? found[0];
  if (best !== undefined) return best;
  // The refusal that came furthest says most.
  throw refusals.find(({code}) => !code.startsWith("column/")) ?? refusals[0]!;
}

function noObservable({choices}: Survey): string {
  const defined = UNITS.find(({symbol}) => choices.some(({role, unit}) => role === "value" && unit === symbol));
  const unit = defined === undefined ? "the unit of the file" : DELIVERY_UNIT[defined.dimension].symbol;
  return `No --observable was given: readings stand in ${unit}, and corrections of every method are listed.`;
}

/** Raised where the file itself names another unit than the observable has. */
const UNIT_DOUBTS: ReadonlySet<string> = new Set(["column/unit", "grid/unit"]);

async function withHeight(files: ByteSource[], settings: AcquisitionSettings): Promise<Opened> {
  try {
    return {survey: await openSurvey(files, settings), filledIn: [], known: {heights: true, observable: true}};
  } catch (error) {
    if (!(error instanceof InputError && error.code === "height/none")) throw error;
  }
  return {
    survey: await openSurvey(files, {...settings, elevation: 0}),
    filledIn: ["No height of the sensor is known: heights are left out. Give --clearance H or --elevation Z."],
    known: {heights: false, observable: true},
  };
}
