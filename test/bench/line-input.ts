/** An invented gravity line of 2,000 stations over strips of dense rock, for the case `line`. */
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {GRAVITATIONAL_CONSTANT} from "../../lib/quantities.ts";

const STATIONS = 2_000;
const SPACING = 3;
const NOISE_MGAL = 0.02;
const MGAL = 1e-5;

/** From and to in m of chainage, surface density in kg/m². */
const STRIPS = [
  [620, 840, 9_000],
  [1_500, 1_560, 14_000],
  [1_900, 2_600, -3_500],
  [3_300, 3_390, 11_000],
  [4_200, 5_150, 4_200],
  [5_500, 5_530, 20_000],
] as const;

/** The settings, as the program takes them and as the baseline reads them: 600 panels of 10 m. */
export const LINE_SETTINGS = {
  noise: NOISE_MGAL,
  rms: 0.15,
  support: [0, 6_000],
  boundary: 200,
  panel: 10,
  levels: [0, 10],
  strips: [
    ["near", 620, 840],
    ["lens", 3_300, 3_390],
    ["wide", 4_200, 5_150],
  ],
  confidence: 0.95,
} as const;

export const lineOptions = (out: string): readonly string[] => [
  ...["--observable", "gravity", "--noise", `${LINE_SETTINGS.noise}`, "--bound", `rms:${LINE_SETTINGS.rms}`],
  ...["--boundary", `${LINE_SETTINGS.boundary}`, "--support", LINE_SETTINGS.support.join(":")],
  ...["--panel", `${LINE_SETTINGS.panel}`, "--out", out, "--replace", "--quiet"],
  ...LINE_SETTINGS.levels.flatMap((level) => ["--level", `${level}`]),
  ...LINE_SETTINGS.strips.flatMap(([name, from, to]) => ["--strip", `${name}=${from}:${to}`]),
];

/** Heights sway between 38.5 and 41.5 m above the boundary, so that no shortcut for level lines applies. */
export function lineTable(): string {
  const random = seededRandom(20261201);
  const noise = normalDeviates(random, STATIONS);
  const rows = ["line,chainage,elevation,gravity"];
  for (let i = 0; i < STATIONS; ++i) {
    const x = i * SPACING;
    const height = 40 + 1.5 * Math.sin(x / 310);
    let field = 0;
    for (const [from, to, density] of STRIPS)
      field += (2 * Math.PI * GRAVITATIONAL_CONSTANT * density * harmonicMeasure(x, height, from, to)) / MGAL;
    const value = field + 1.5 - 2e-4 * x + NOISE_MGAL * noise[i];
    rows.push(`B1,${x},${(LINE_SETTINGS.boundary + height).toFixed(3)},${value.toFixed(5)}`);
  }
  return `${rows.join("\n")}\n`;
}
