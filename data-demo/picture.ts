/**
 * Draws the picture of README.md: line SM-05 of the demonstration survey with the settings of README's first
 * command, in the figure that the report shows. From the project's root: npm run demo:make.
 */
import {readFile, writeFile} from "node:fs/promises";
import {openSurvey} from "../lib/acquisition/catalogue.ts";
import {boundRuleNamed} from "../lib/inverse/rules/catalogue.ts";
import {profileFigure} from "../lib/report/figures/profile.ts";
import {STYLE} from "../lib/report/style.ts";
import {studyLine} from "../lib/study/line-study.ts";
import type {Settings} from "../lib/study/settings.ts";

/** What README's first command asks for, without its levels: the picture is of readings, residual and source. */
export const SM_05: Settings = {
  acquisition: {
    columns: new Map(),
    clearance: undefined,
    elevation: undefined,
    sensorOffset: 0,
    elevationDatum: undefined,
    groundDatum: undefined,
    geoidOffset: undefined,
    crs: "EPSG:25833",
    outCrs: undefined,
    split: undefined,
    channels: [{role: "value", observable: "field-vertical", unit: undefined, noise: 0.8}],
    profiles: "rows",
  },
  model: {
    boundary: {kind: "depth", depth: 2},
    support: [{from: 190, to: 335, group: undefined}],
    panel: undefined,
    regional: 1,
  },
  bound: boundRuleNamed("rms:350", 1e-9),
  wanted: {
    levels: [],
    strips: [
      {name: "dyke", from: 204, to: 216, group: undefined},
      {name: "rubble", from: 288, to: 320, group: undefined},
    ],
    confidence: 0.95,
  },
  processing: undefined,
};

/** The picture as a file of its own: the figure, its style sheet and a ground that dark pages do not shine through. */
export async function drawPicture(folder: string): Promise<string> {
  const bytes = await readFile(`${folder}/skelder-moor-sm-05.csv`);
  const file = {
    name: "skelder-moor-sm-05.csv",
    size: bytes.length,
    read: async (offset: number, length: number) => bytes.subarray(offset, offset + length),
  };
  const survey = await openSurvey([file], SM_05.acquisition);
  for await (const record of survey.lines()) {
    if ("failure" in record) throw record.failure;
    const figure = profileFigure(studyLine(record.line, SM_05));
    const open = figure.indexOf(">");
    return [
      figure.slice(0, open).replace("<svg ", '<svg xmlns="http://www.w3.org/2000/svg" '),
      ` font-family="'Source Sans 3','Noto Sans','Segoe UI','Helvetica Neue','Liberation Sans',Arial,sans-serif">\n`,
      `<style>${svgRules()}</style>\n<rect width="100%" height="100%" fill="#fff"/>\n`,
      // The part that clips says nothing of its own to those who do not see.
      figure.slice(open + 1).replaceAll("<svg ", '<svg aria-hidden="true" '),
      "\n",
    ].join("");
  }
  throw new Error("skelder-moor-sm-05.csv holds no line");
}

/** The rules of the report's style sheet that speak of marks and text in a figure. */
const svgRules = (): string =>
  STYLE.split("\n")
    .filter((rule) => /^(:root|svg |\.[a-z]+\{[^}]*(fill|stroke))/.test(rule) && !rule.startsWith("svg,"))
    .join("\n");

if (process.argv[1] === import.meta.filename) {
  const folder = process.argv[2] ?? "data-demo";
  await writeFile(`${folder}/skelder-moor-sm-05.svg`, await drawPicture(folder));
}
