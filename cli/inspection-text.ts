/** An inspection for people: tables of the lines, agreement of neighbours, and what is not corrected. */
import {DELIVERY_UNIT} from "../lib/quantities.ts";
import {counted} from "../lib/report/number-text.ts";
import type {Inspection} from "../lib/survey/inspection.ts";
import type {LineFigures} from "../lib/survey/line-figures.ts";
import type {Known} from "./open-for-inspection.ts";
import {paragraph} from "./paragraph.ts";
import {type Column, figure, textTable} from "./table.ts";

/** Rows of a table on the screen; `--json` holds all. */
const MOST_LINES = 200;
const MOST_ROWS = 12;
const MOST_PAIRS = 40;
const WIDTH = 100;

const left = (head: string): Column => ({head, align: "left"});
const right = (head: string): Column => ({head, align: "right"});
/** Chainage and heights, to be read and typed back into options. */
const metres = (value: number): string => `${Number(value.toFixed(Math.abs(value) >= 1000 ? 0 : 1)) + 0}`;
/** A correlation; blank where there is none. */
const decimals = (value: number): string => (Number.isFinite(value) ? value.toFixed(2) : "");
const percent = (share: number): string => (share < 1e-4 ? "<0.01" : figure(100 * share, 2));

/** What is not known is left out: heights and what follows from them, or the unit. */
export function inspectionText(inspection: Inspection, known: Known): string {
  const {lines, neighbours, notCorrected, kind, grid} = inspection;
  const most = kind === "grid" ? MOST_ROWS : MOST_LINES;
  const shown = lines.slice(0, most);
  const parts = [positions(shown), readings(shown, known)];
  if (shown.some(({fieldAlong}) => fieldAlong !== undefined)) parts.push(directions(shown));
  if (shown.some(({channels}) => noiseWords(channels[0]) === PARTLY_SIGNAL)) parts.push(PARTLY_SIGNAL_MEANING);
  const noun = grid?.orientation.slice(0, -1) ?? "line";
  if (lines.length > most) parts.push(`The first ${most} of ${counted(lines.length, noun)}; --json gives all.\n`);
  if (neighbours !== undefined && neighbours.pairs.length > 0) parts.push(agreement(inspection, neighbours, known));
  const corrections = notCorrected.map(({name, words}) => paragraph(`  ${name}: `, words, WIDTH, "      ")).join("");
  parts.push(`Groundward does not correct readings. What stays in them unless it was removed before:\n${corrections}`);
  return parts.join("\n");
}

/** What the readings of the first channel are divided by, and what stands behind them: the unit, where it is known. */
function unitOf(lines: readonly LineFigures[], known: Known): {readonly factor: number; readonly after: string} {
  const {factor, symbol} = DELIVERY_UNIT[lines[0]?.channels[0]?.dimension ?? "field"];
  return {factor, after: known.observable ? ` ${symbol}` : ""};
}

/** Where the lines run. */
function positions(lines: readonly LineFigures[]): string {
  const columns = [
    left("line"),
    left("group"),
    right("stations"),
    right("left out"),
    right("azimuth"),
    right("from m"),
    right("to m"),
    right("spacing m"),
    right("gaps"),
    right("largest"),
    right("repeats"),
    right("back"),
  ];
  return textTable(
    columns,
    lines.map((line) => [
      line.id,
      line.group,
      `${line.stations}`,
      `${line.omitted}`,
      line.azimuth === undefined ? "" : line.azimuth.toFixed(0),
      metres(line.from),
      metres(line.to),
      figure(line.spacing.median, 3),
      `${line.gaps.count}`,
      line.gaps.count === 0 ? "" : figure(line.gaps.largest, 3),
      `${line.repeats}`,
      `${line.backward}`,
    ]),
  );
}

/** Height and readings of the first channel, and whether the noise of the record means anything. */
function readings(lines: readonly LineFigures[], known: Known): string {
  const unit = unitOf(lines, known);
  const columns = [
    left("line"),
    ...(known.heights
      ? [right(`${lines[0]?.heights[0]?.kind ?? "height"} m`), right("step/height"), right("aliased %")]
      : []),
    right("offset m"),
    right(`readings${unit.after}`),
    right(`noise${unit.after}`),
    left("noise is"),
  ];
  const value = (si: number): string => figure(si / unit.factor, 4);
  return textTable(
    columns,
    lines.map((line) => {
      const [channel] = line.channels;
      const height = line.heights[0];
      return [
        line.id,
        ...(known.heights
          ? [
              height === undefined ? "" : metres(height.median),
              figure(line.sampling?.spacingToHeight, 2),
              line.sampling === undefined ? "" : percent(line.sampling.aliased.field),
            ]
          : []),
        figure(line.offset.greatest, 3),
        channel === undefined ? "" : `${value(channel.readings.least)} .. ${value(channel.readings.greatest)}`,
        channel?.noise === undefined ? "" : figure(channel.noise.sigma / unit.factor, 3),
        noiseWords(channel),
      ];
    }),
  );
}

/** What of the Earth's field lies in the plane of each line. */
function directions(lines: readonly LineFigures[]): string {
  const table = textTable(
    [left("line"), right("inclination along the line °"), right("β")],
    lines.map(({id, fieldAlong}) => [
      id,
      fieldAlong === undefined ? "" : fieldAlong.inclination.toFixed(1),
      fieldAlong === undefined ? "" : fieldAlong.beta.toFixed(3),
    ]),
  );
  return `${table}${paragraph("", DIRECTION_MEANING, WIDTH, "")}`;
}

const DIRECTION_MEANING =
  "The Earth's field seen along each line, towards increasing chainage: its inclination there, and β, the part of it that lies in the plane of the line. A total-field sensor reads β times the sources' field along it; near 0 it reads nothing of them.";

const PARTLY_SIGNAL = "partly signal?";
const PARTLY_SIGNAL_MEANING = paragraph(
  "",
  `${PARTLY_SIGNAL}: stations are farther apart than a tenth of the height, so that the anomaly leaks into the fourth differences that the noise is taken from.`,
  WIDTH,
  "",
);

/** What the noise by fourth differences is worth. */
function noiseWords(channel: LineFigures["channels"][number] | undefined): string {
  if (channel === undefined) return "";
  if (channel.noise === undefined) return "not known";
  const {noiseLength} = channel;
  if (!channel.noise.white) return noiseLength > 0 ? "of another length" : "not white";
  if (channel.noiseMeaningful === undefined) return noiseLength > 0 ? "of that length" : "white";
  return channel.noiseMeaningful ? "sound" : PARTLY_SIGNAL;
}

function agreement(
  inspection: Inspection,
  {pairs, heading, words, correlation}: NonNullable<Inspection["neighbours"]>,
  known: Known,
): string {
  const unit = unitOf(inspection.lines, known);
  const value = (si: number): string => figure(si / unit.factor, 3);
  const table = textTable(
    [
      left("line"),
      left("neighbour"),
      right("apart m"),
      right("from m"),
      right("to m"),
      right("correlation"),
      right(`difference${unit.after}`),
      left("flown"),
    ],
    pairs
      .slice(0, MOST_PAIRS)
      .map(({lines, distance, from, to, correlation, difference, sameWay}) => [
        ...lines,
        figure(distance, 3),
        metres(from),
        metres(to),
        decimals(correlation),
        value(difference),
        sameWay ? "the same way" : "opposite ways",
      ]),
  );
  const rest = pairs.length > MOST_PAIRS ? `The first ${MOST_PAIRS} of ${pairs.length} pairs; --json gives all.\n` : "";
  const ways =
    heading.oppositePairs === 0
      ? ""
      : paragraph(
          "",
          `Lines flown towards increasing chainage read ${value(heading.opposite)}${unit.after} above those flown against it (median of ${counted(heading.oppositePairs, "pair")}); lines flown the same way differ by ${value(heading.sameWay)}${unit.after} (${counted(heading.sameWayPairs, "pair")}).`,
          WIDTH,
          "",
        );
  const median = Number.isFinite(correlation) ? `Median correlation of neighbours ${decimals(correlation)}. ` : "";
  return `${table}${rest}${ways}${paragraph("", `${median}${words}`, WIDTH, "")}`;
}
