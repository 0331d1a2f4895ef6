/** An invented magnetic grid of float32 pixels, 1,000 to a row, for the case `grid`. */
import {closeSync, openSync, writeSync} from "node:fs";
import {ascii, doubles, encodeDirectory, longs, shorts} from "../../lib/formats/tiff-directory-write.ts";
import {TAG} from "../../lib/formats/tiff-tags.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";

const COLUMNS = 1_000;
const PIXEL = 20;
const CLEARANCE = 60;
const NODATA = -32_768;
const HEADER = 8;

/** Threads are asked for, or the taller grid alone would have them. */
export const gridOptions = (out: string): readonly string[] => [
  ...["--observable", "field-vertical", "--clearance", `${CLEARANCE}`, "--noise", "1", "--bound", "discrepancy"],
  ...["--out", out, "--replace", "--quiet", "--workers", "2"],
];

/** Without a value: a margin on every row, a lake on some, and the last rows. */
function hasNoValue(row: number, column: number, rows: number): boolean {
  if (column < 12 || column >= COLUMNS - 8) return true;
  if (row % 1_000 >= 400 && row % 1_000 < 480 && column >= 300 && column < 345) return true;
  return row >= rows - 5;
}

/** Two sheets that strike with the columns, nT, over a slope; one random sequence for all rows, shifted from row to row. */
export function writeGrid(path: string, rows: number): void {
  const signal = Float64Array.from({length: COLUMNS}, (_, column) => {
    const x = (column + 0.5) * PIXEL;
    return (
      700 * harmonicMeasure(x, CLEARANCE, 6_200, 6_900) - 260 * harmonicMeasure(x, CLEARANCE, 12_800, 15_100) + 4e-3 * x
    );
  });
  const noise = normalDeviates(seededRandom(77), 8_191);
  const file = openSync(path, "w");
  const head = new DataView(new ArrayBuffer(HEADER));
  head.setUint16(0, 0x4949);
  head.setUint16(2, 42, true);
  head.setUint32(4, HEADER + 4 * COLUMNS * rows, true);
  writeSync(file, new Uint8Array(head.buffer));
  const row = new DataView(new ArrayBuffer(4 * COLUMNS));
  for (let i = 0; i < rows; ++i) {
    const strength = 1 + 0.3 * Math.sin(i / 90);
    for (let j = 0; j < COLUMNS; ++j) {
      const value = strength * signal[j] + noise[(i * COLUMNS + j) % noise.length];
      row.setFloat32(4 * j, hasNoValue(i, j, rows) ? NODATA : value, true);
    }
    writeSync(file, new Uint8Array(row.buffer));
  }
  const ofRow = (offset: (i: number) => number): number[] => Array.from({length: rows}, (_, i) => offset(i));
  const directory = encodeDirectory(
    [
      longs(TAG.imageWidth, COLUMNS),
      longs(TAG.imageLength, rows),
      shorts(TAG.bitsPerSample, 32),
      shorts(TAG.compression, 1),
      shorts(TAG.photometric, 1),
      longs(TAG.stripOffsets, ...ofRow((i) => HEADER + 4 * COLUMNS * i)),
      shorts(TAG.samplesPerPixel, 1),
      longs(TAG.rowsPerStrip, 1),
      longs(TAG.stripByteCounts, ...ofRow(() => 4 * COLUMNS)),
      shorts(TAG.sampleFormat, 3),
      doubles(TAG.modelPixelScale, [PIXEL, PIXEL, 0]),
      doubles(TAG.modelTiepoint, [0, 0, 0, 300_000, 6_100_000, 0]),
      shorts(TAG.geoKeyDirectory, 1, 1, 0, 3, 1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, 32_633),
      ascii(TAG.gdalNodata, new TextEncoder().encode(`${NODATA}`)),
    ],
    HEADER + 4 * COLUMNS * rows,
    0,
    false,
  );
  writeSync(file, directory);
  closeSync(file);
}
