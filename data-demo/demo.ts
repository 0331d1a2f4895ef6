/**
 * `npm run demo`: the main job on the demonstration survey, told in short. Every command is printed as it can be
 * typed; its files stay in out/. What is true of the invented ground stands beside every answer.
 */
import {readFile} from "node:fs/promises";
import {type DoubtSummary, doubtText} from "../cli/doubts.ts";
import {nodeHost} from "../cli/host.ts";
import type {Terminal} from "../cli/nouns.ts";
import {paragraph} from "../cli/paragraph.ts";
import {groundward} from "../cli/program.ts";
import {figure, textTable} from "../cli/table.ts";

const LINES = "data-demo/skelder-moor-lines.csv";
const GRID = "data-demo/skelder-east-grid.tif";

const INSPECT = [`inspect ${LINES} --crs EPSG:25833 --observable field-vertical`];
const CONTINUE_LINES = [
  `continue ${LINES}`,
  "--crs EPSG:25833 --observable field-vertical --noise 0.8 --boundary depth-2",
  "--bound rms:350 --support 190:335 --strip dyke=204:216 --strip rubble=288:320",
  "--level 0 --level ground+2 --out out/demo-lines --replace",
];
const CONTINUE_GRID = [
  `continue ${GRID}`,
  "--observable field-vertical --clearance 60 --noise 1 --bound discrepancy",
  "--level 30 --out out/demo-grid --replace",
];

/** The parts of the program's JSON that are told here. */
interface Inspected {
  readonly lines: readonly {
    readonly stations: number;
    readonly spacing: {readonly median: number};
    readonly heights: readonly {readonly median: number}[];
    readonly channels: readonly {readonly noise?: {readonly sigma: number}}[];
  }[];
  readonly neighbours: {readonly correlation: number};
}
interface Continued {
  readonly strips: readonly Readonly<Record<string, number | string>>[];
  readonly rows: Readonly<Record<string, number>>;
  readonly misfit: number;
  readonly misfit_expected: number;
  readonly resolution_m: number;
  readonly doubts: readonly DoubtSummary[];
  readonly intervals: readonly {readonly text: string}[];
  readonly cautions: readonly string[];
}
interface Sheet {
  readonly line: string;
  readonly body: string;
  readonly from: number;
  readonly to: number;
  readonly magnetisation: number;
}

const {out, err} = nodeHost();
const say = (text = ""): void => out.write(paragraph("", text, 100, ""));

/** Prints a command, runs it, and hands back its JSON; a command that fails ends the demonstration with its status. */
async function result<Told>(parts: readonly string[]): Promise<Told> {
  out.write(`\n$ npx groundward ${parts.join(" \\\n      ")}\n`);
  let text = "";
  const captured: Terminal = {
    isTerminal: false,
    columns: 100,
    write: (more) => {
      text += more;
    },
  };
  const words = parts.join(" ").split(" ");
  const status = await groundward(nodeHost({arguments: [...words, "--json"], out: captured, err}));
  if (status !== 0) process.exit(status);
  return JSON.parse(text) as Told;
}

const range = (values: readonly number[], digits: number): string =>
  `${Math.min(...values).toPrecision(digits)} to ${Math.max(...values).toPrecision(digits)}`;

/** What the ground is made of: skelder-moor-truth.csv. */
async function groundTruth(): Promise<readonly Sheet[]> {
  const [, ...rows] = (await readFile("data-demo/skelder-moor-truth.csv", "utf8")).trimEnd().split("\n");
  return rows.map((row) => {
    const [line, body, from, to, magnetisation] = row.split(",");
    return {line: line!, body: body!, from: Number(from), to: Number(to), magnetisation: Number(magnetisation)};
  });
}

function tellStrips(strips: Continued["strips"], truth: readonly Sheet[]): void {
  let held = 0;
  const rows = strips.map((strip) => {
    const {line, strip: name} = strip;
    const [mean, lower, upper] = ["mean_A/m", "lower_A/m", "upper_A/m"].map((key) => Number(strip[key]));
    const sheets = truth.filter((sheet) => sheet.line === line && sheet.body === name);
    const total = sheets.reduce((sum, {from, to, magnetisation}) => sum + magnetisation * (to - from), 0);
    const truly = total / (Number(strip["to_m"]) - Number(strip["from_m"]));
    if (lower! <= truly && truly <= upper!) ++held;
    return [
      String(line),
      String(name),
      figure(mean, 3),
      `${figure(lower, 3)} .. ${figure(upper, 3)}`,
      figure(truly, 3),
    ];
  });
  const heads = ["line", "strip", "mean A/m", "95 % interval", "true A/m"];
  out.write(
    textTable(
      heads.map((head, i) => ({head, align: i < 2 ? ("left" as const) : ("right" as const)})),
      rows,
    ),
  );
  say(`${held} of ${strips.length} intervals hold the truth of the invented ground.`);
}

/** What a run doubts, and what its intervals rest on. */
function tellGrounds({doubts, intervals}: Continued, noun: string): void {
  for (const doubt of doubts) say(`${doubt.weight}: ${doubtText(doubt, noun)}`);
  for (const {text} of intervals) say(text);
}

say("Skelder Moor, an invented survey: twelve drone lines over a buried dyke and a strip of rubble, and a grid.");

const {lines, neighbours} = await result<Inspected>(INSPECT);
say(
  `${lines.length} lines, ${lines.reduce((sum, {stations}) => sum + stations, 0)} stations ${lines[0]!.spacing.median.toPrecision(2)} m apart, sensor ${range(
    lines.map(({heights}) => heights[0]!.median),
    3,
  )} m above the ground, noise ${range(
    lines.map(({channels}) => channels[0]!.noise!.sigma),
    2,
  )} nT by fourth differences, median correlation of neighbouring lines ${neighbours.correlation.toPrecision(3)}.`,
);

const moor = await result<Continued>(CONTINUE_LINES);
tellStrips(moor.strips, await groundTruth());
tellGrounds(moor, "line");

const east = await result<Continued>(CONTINUE_GRID);
const {done, doubtful, skipped, failed} = east.rows;
say(
  `${done! + doubtful!} rows answered (${doubtful} of them with a doubt), ${skipped} skipped, ${failed} failed; misfit ${figure(east.misfit / east.misfit_expected, 3)} of what noise alone gives, resolution ${figure(east.resolution_m, 3)} m.`,
);

tellGrounds(east, "row");

say();
for (const caution of east.cautions) say(caution);
say();
say("Open first: out/demo-lines/report.html (every line: data, fit, source, levels, doubts).");
say(
  "Then out/demo-grid/report.html; the grids beside it open in any GIS; strips.csv and levels.csv in any spreadsheet.",
);
