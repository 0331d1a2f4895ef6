/** `plan` from what was asked to tables and, with --out, files. */
import {planCsv} from "../lib/products/plan-csv.ts";
import {planHtml} from "../lib/products/plan-html.ts";
import type {FileDigest} from "../lib/products/record.ts";
import {cautionSentence, cautionsFor} from "../lib/report/cautions.ts";
import {planNotes} from "../lib/report/plan-words.ts";
import {type Plan, planSurvey} from "../lib/study/plan.ts";
import {messagesTo} from "./messages.ts";
import type {Host} from "./nouns.ts";
import {type Asked, isOn, oneOf} from "./options/entry.ts";
import {planSettingsFrom} from "./options/plan-options.ts";
import {planJson, planText} from "./plan-result.ts";
import {openRunFolder} from "./run-folder.ts";

const FILES = ["plan.csv", "plan.html"];
/** Say nothing of what is planned. */
const NO_SETTING = new Set(["out", "replace", "json", "quiet"]);

/** @returns the exit status */
export async function planRun(asked: Asked, host: Host): Promise<number> {
  const form = {json: isOn(asked, "json"), quiet: isOn(asked, "quiet")};
  const messages = messagesTo(host, form);
  const settings = planSettingsFrom(asked);
  const out = oneOf(asked, "out");
  const plan = await withFolder(asked, host, out, () => planSurvey(settings));
  const notes = planNotes(plan);
  const cautions = cautionsFor("lines").map(cautionSentence);
  if (form.json) {
    const files = out === undefined ? {} : {out, files: [...FILES, "record.json", "timing.json"]};
    host.out.write(`${JSON.stringify({...planJson(plan), notes, cautions, ...files}, undefined, 2)}\n`);
    return 0;
  }
  host.out.write(planText(plan));
  for (const note of notes) messages.note(note);
  if (out !== undefined) messages.note(`4 files in ${out}: ${FILES.join(", ")}, record.json, timing.json.`);
  for (const caution of cautions) messages.note(caution);
  return 0;
}

/** Opens the folder before anything is computed, so that one that refuses is known at once. */
async function withFolder(asked: Asked, host: Host, out: string | undefined, work: () => Plan): Promise<Plan> {
  if (out === undefined) return work();
  const started = host.now();
  const plan = Object.fromEntries([...asked].filter(([name]) => !NO_SETTING.has(name)).sort());
  const program = {name: "groundward", version: host.version, ...host.runtime};
  const record = (outputs: readonly FileDigest[]): string =>
    `${JSON.stringify({program, inputs: [], settings: {plan}, outputs: outputs.map(({file, bytes, sha256}) => ({file, bytes, sha256}))}, undefined, 2)}\n`;
  const folder = await openRunFolder(host, out, {
    identity: {settings: {plan}, inputs: []},
    replace: isOn(asked, "replace"),
    writes: (name) => FILES.includes(name),
  });
  try {
    const done = work();
    await planCsv(await folder.openText("plan.csv"), done);
    await planHtml(await folder.openText("plan.html"), done, host.version);
    const timing = (): string =>
      `${JSON.stringify({started: host.dateText(started), finished: host.dateText(host.now())}, undefined, 2)}\n`;
    await folder.finish(record, timing);
    return done;
  } finally {
    await folder.abandon();
  }
}
