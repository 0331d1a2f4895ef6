/** Settings for tests: gravity in mGal at a clearance of 10 m unless a test says otherwise. */
import type {AcquisitionSettings} from "../../lib/acquisition/settings.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import type {Survey} from "../../lib/survey/survey.ts";

export const settingsWith = (own: Partial<AcquisitionSettings> = {}): AcquisitionSettings => ({
  columns: new Map(),
  clearance: 10,
  elevation: undefined,
  sensorOffset: 0,
  elevationDatum: undefined,
  groundDatum: undefined,
  geoidOffset: undefined,
  crs: undefined,
  outCrs: undefined,
  split: undefined,
  channels: [{role: "value", observable: "gravity", unit: undefined, noise: 0.02}],
  profiles: "rows",
  ...own,
});

/** Every line of a survey; a line that failed throws. */
export async function linesOf(survey: Survey): Promise<SurveyLine[]> {
  const lines: SurveyLine[] = [];
  for await (const record of survey.lines()) {
    if ("failure" in record) throw record.failure;
    lines.push(record.line);
  }
  return lines;
}

/** Codes of the lines that failed, by name. */
export async function failuresOf(survey: Survey): Promise<Map<string, string>> {
  const failures = new Map<string, string>();
  for await (const record of survey.lines()) if ("failure" in record) failures.set(record.id, record.failure.code);
  return failures;
}
