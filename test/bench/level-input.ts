/** Invented level lines over plates of magnetised rock, for the cases of level lines: stations at the middle of cells. */
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import type {Settings} from "../../lib/study/settings.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {plainSettings, syntheticLine} from "../harness/synthetic-line.ts";

const SPACING = 2;
const HEIGHT = 20;
const NT = 1e-9;
const NOISE = 0.1 * NT;
/** Root-mean-square of the source, nT. */
const RMS = 15;
/** From and to as shares of the line, strength in nT; longer lines repeat them every so many stations. */
const PLATES = [
  [0.1, 0.14, 30],
  [0.3, 0.31, -50],
  [0.5, 0.7, 10],
  [0.8, 0.82, 40],
] as const;
const REPEAT = 2_000 * SPACING;

const levelLength = (stations: number): number => stations * SPACING;

function levelReadingsAt(stations: number, seed: number): {x: Float64Array; values: Float64Array} {
  const deviates = normalDeviates(seededRandom(seed), stations);
  const x = Float64Array.from({length: stations}, (_, i) => (i + 0.5) * SPACING);
  const values = x.map((at, i) => {
    const first = Math.floor(at / REPEAT);
    let field = 0;
    // Plates two repeats away read a few thousandths of their strength: the line is invented anyway.
    for (let part = Math.max(0, first - 1); part <= first + 1 && part * REPEAT < levelLength(stations); ++part)
      for (const [from, to, strength] of PLATES)
        field += strength * harmonicMeasure(at, HEIGHT, (part + from) * REPEAT, (part + to) * REPEAT);
    return NT * field + NOISE * deviates[i]!;
  });
  return {x, values};
}

export const levelSurveyLine = (stations: number, seed: number): SurveyLine => {
  const {x, values} = levelReadingsAt(stations, seed);
  return syntheticLine({
    ...{id: `L${seed}`, chainage: x, clearance: HEIGHT},
    ...{values, noise: NOISE, observable: fieldVertical},
  });
};

/** A panel a station, no level and no strip: the source and the averages on all panels. */
export const levelSettings = (stations: number): Settings =>
  plainSettings({
    support: [{group: undefined, from: 0, to: levelLength(stations)}],
    panel: SPACING,
    bound: boundRuleNamed(`rms:${RMS}`, NT),
    levels: [],
  });

/** The same for the baselines; nT. */
export const levelJob = (stations: number, seed: number) => {
  const {x, values} = levelReadingsAt(stations, seed);
  return {
    x: [...x],
    value: Array.from(values, (value) => value / NT),
    ...{height: HEIGHT, spacing: SPACING, noise: NOISE / NT, rms: RMS, confidence: 0.95},
    ...{support: [0, levelLength(stations)], panel: SPACING},
  };
};

/** Lines of one geometry, their noise different, and the options that go with them. */
export function levelTable(stations: number, lines: number): string {
  const rows = ["line,chainage,elevation,value"];
  for (let seed = 1; seed <= lines; ++seed) {
    const {x, values} = levelReadingsAt(stations, seed);
    values.forEach((value, i) => {
      rows.push(`L${seed},${x[i]},${HEIGHT},${(value / NT).toFixed(5)}`);
    });
  }
  return `${rows.join("\n")}\n`;
}

export const levelOptions = (stations: number, out: string): readonly string[] => [
  ...["--column", "value=value", "--observable", "field-vertical", "--noise", `${NOISE / NT}`],
  ...["--bound", `rms:${RMS}`, "--support", `0:${levelLength(stations)}`, "--boundary", "0", "--panel", `${SPACING}`],
  ...["--out", out, "--replace", "--quiet"],
];
