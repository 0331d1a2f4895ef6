/**
 * Makes the demonstration survey: every data file beside this one. The place, the people and the numbers are
 * invented; the same seed gives the same survey. From the project's root: npm run demo:make.
 */
import {mkdir, open, rm, writeFile} from "node:fs/promises";
import {openCog} from "../lib/formats/cog-write.ts";
import {coordinateSystem} from "../lib/geometry/coordinate-system.ts";
import {transformation} from "../lib/geometry/transformation.ts";
import {normalDeviates, seededRandom} from "../lib/numeric/random.ts";
import {harmonicMeasure} from "../lib/potential/poisson.ts";
import {VACUUM_PERMEABILITY} from "../lib/quantities.ts";

const SEED = 20261201;

/** One stretch of a sheet magnetised downward whose bottom is far below, A/m; chainage in m. */
interface Sheet {
  readonly name: "dyke" | "rubble" | "grid";
  readonly from: number;
  readonly to: number;
  readonly magnetisation: number;
}

/** Vertical field of the sheets, nT: μ0 M/2 times the harmonic measure of each. */
const verticalField = (sheets: readonly Sheet[], x: number, height: number): number =>
  sheets.reduce(
    (sum, {from, to, magnetisation}) =>
      sum + 0.5e9 * VACUUM_PERMEABILITY * magnetisation * harmonicMeasure(x, height, from, to),
    0,
  );

/** Skelder Moor: twelve lines, 15 m apart, towards 62° and back, over a dyke and a strip of rubble fill. */
const LINES = {
  count: 12,
  spacing: 15,
  length: 420,
  step: 1.5,
  azimuth: 62,
  origin: [412_350, 5_987_640] as const,
  /** Depth of the source level below the lowest ground, m. */
  depth: 2,
  ground: 86,
  clearance: 12,
  noise: 0.8,
};

const GRID = {columns: 160, rows: 64, pixel: 10, clearance: 60, noise: 1, west: 415_000, north: 5_991_000};

/** The rubble: bricks and slag tipped load by load, each load with a mean of its own. */
function rubble(line: number, deviates: Float64Array): Sheet[] {
  return Array.from({length: 8}, (_, k) => ({
    name: "rubble",
    from: 288 + 4 * k,
    to: 292 + 4 * k,
    magnetisation: 0.22 + 0.1 * deviates[(8 * line + k) % deviates.length],
  }));
}

/** The readings, and the sheets that made them. */
function surveyLines(): {readonly readings: string; readonly truth: string} {
  const random = seededRandom(SEED);
  const [eastOrigin, northOrigin] = LINES.origin;
  const bearing = (LINES.azimuth * Math.PI) / 180;
  const along = [Math.sin(bearing), Math.cos(bearing)] as const;
  const loads = normalDeviates(random, 8 * LINES.count);
  const rows = ["line,easting,northing,elevation,ground,bz_nT"];
  const truth = ["line,body,from_m,to_m,magnetisation_A/m"];
  for (let line = 0; line < LINES.count; ++line) {
    const id = `SM-${String(line + 1).padStart(2, "0")}`;
    const dyke: Sheet = {name: "dyke", from: 204, to: 216, magnetisation: 1.6 + 0.08 * normalDeviates(random, 1)[0]};
    const sheets = [dyke, ...rubble(line, loads)];
    for (const {name, from, to, magnetisation} of sheets)
      truth.push([id, name, from, to, magnetisation.toFixed(6)].join(","));
    const count = Math.round(LINES.length / LINES.step) + 1;
    const noise = normalDeviates(random, count);
    const sway = normalDeviates(random, 4);
    const back = line % 2 === 1;
    // Sensors read a little differently on the way back; the daily variation leaves a slope.
    const offset = (back ? -1.5 : 1.5) + 0.4 * sway[2];
    const slope = 0.004 * sway[3];
    for (let k = 0; k < count; ++k) {
      const place = back ? count - 1 - k : k;
      const chainage = place * LINES.step;
      const across = -line * LINES.spacing + 0.5 * Math.sin(chainage / 37 + sway[0]);
      const ground = LINES.ground + 0.35 * Math.sin(chainage / 95) + 0.2 * Math.cos(chainage / 41 + line / 5);
      const elevation = ground + LINES.clearance + 0.9 * Math.sin(chainage / 29 + sway[1]) + 0.25 * sway[2];
      const level = LINES.ground - 0.55 - LINES.depth;
      const field =
        verticalField(sheets, chainage, elevation - level) + offset + slope * chainage + LINES.noise * noise[k];
      const east = eastOrigin + chainage * along[0] - across * along[1];
      const north = northOrigin + chainage * along[1] + across * along[0];
      rows.push(
        [id, east.toFixed(2), north.toFixed(2), elevation.toFixed(2), ground.toFixed(2), field.toFixed(2)].join(","),
      );
    }
  }
  return {readings: textOf(rows), truth: textOf(truth)};
}

const textOf = (rows: readonly string[]): string => `${rows.join("\n")}\n`;

/** One line alone, for a first look: the header and the rows of that line. */
const alone = (readings: string, id: string): string =>
  textOf(readings.split("\n").filter((row, i) => i === 0 || row.startsWith(`${id},`)));

/** Rows of the grid run east over a sheet that strikes north, with a corner that was not flown. */
function gridRow(row: number, noise: Float64Array): Float64Array {
  const sheets: Sheet[] = [
    {name: "grid", from: 620, to: 700, magnetisation: 1.1},
    {name: "grid", from: 980, to: 1_130, magnetisation: -0.35},
  ];
  return Float64Array.from({length: GRID.columns}, (_, column) => {
    if (row >= 48 && column >= 130) return Number.NaN;
    const x = (column + 0.5) * GRID.pixel;
    return Math.fround(verticalField(sheets, x, GRID.clearance) + 12 + 0.006 * x + GRID.noise * noise[column]);
  });
}

async function writeGrid(path: string): Promise<void> {
  const scratchPath = `${path}.scratch`;
  const scratch = await open(scratchPath, "w+");
  let scratchEnd = 0;
  const writer = openCog(
    {
      width: GRID.columns,
      height: GRID.rows,
      bands: [{description: "vertical field anomaly, invented", unit: "nT"}],
      georeference: {
        modelPixelScale: [GRID.pixel, GRID.pixel, 0],
        modelTiepoint: [0, 0, 0, GRID.west, GRID.north, 0],
        modelTransformation: [],
        geoKeyDirectory: [1, 1, 0, 3, 1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, 25833],
        geoDoubleParams: [],
        geoAsciiParams: "",
      },
      nodataText: "-99999",
    },
    {
      async append(bytes) {
        await scratch.write(bytes, 0, bytes.length, scratchEnd);
        scratchEnd += bytes.length;
      },
      async read(offset, length) {
        const bytes = new Uint8Array(length);
        await scratch.read(bytes, 0, length, offset);
        return bytes;
      },
    },
  );
  const random = seededRandom(SEED + 1);
  for (let row = 0; row < GRID.rows; ++row)
    await writer.writeRows([gridRow(row, normalDeviates(random, GRID.columns))], 1);
  const file = await open(path, "w");
  await writer.finish({
    async write(bytes) {
      await file.write(bytes);
    },
  });
  await file.close();
  await scratch.close();
  await rm(scratchPath);
}

/** Where sources can be on Skelder Moor, as a polygon in longitude and latitude (RFC 7946). */
function supportPolygon(): string {
  const toDegrees = transformation(coordinateSystem("EPSG:25833"), coordinateSystem("EPSG:4326"));
  const bearing = (LINES.azimuth * Math.PI) / 180;
  const corner = (chainage: number, across: number): [number, number] => {
    const [x, y] = toDegrees.apply(
      LINES.origin[0] + chainage * Math.sin(bearing) - across * Math.cos(bearing),
      LINES.origin[1] + chainage * Math.cos(bearing) + across * Math.sin(bearing),
    );
    return [Number(x.toFixed(8)), Number(y.toFixed(8))];
  };
  const far = -LINES.count * LINES.spacing;
  const ring = [corner(190, 15), corner(190, far), corner(335, far), corner(335, 15), corner(190, 15)];
  return `${JSON.stringify(
    {
      type: "FeatureCollection",
      features: [
        {
          type: "Feature",
          properties: {name: "Skelder Moor source zone (invented)"},
          geometry: {type: "Polygon", coordinates: [ring]},
        },
      ],
    },
    null,
    2,
  )}\n`;
}

/** Writes every file of the survey into `folder`, which is made where it is missing. */
export async function makeSurvey(folder: string): Promise<void> {
  const {readings, truth} = surveyLines();
  await mkdir(folder, {recursive: true});
  await writeFile(`${folder}/skelder-moor-lines.csv`, readings);
  await writeFile(`${folder}/skelder-moor-sm-05.csv`, alone(readings, "SM-05"));
  await writeFile(`${folder}/skelder-moor-truth.csv`, truth);
  await writeFile(`${folder}/skelder-moor-support.geojson`, supportPolygon());
  await writeGrid(`${folder}/skelder-east-grid.tif`);
}

if (process.argv[1] === import.meta.filename) await makeSurvey(process.argv[2] ?? "data-demo");
