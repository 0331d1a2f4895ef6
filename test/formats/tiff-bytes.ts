/** Small TIFF files made to order, damaged ones included. */
import type {Georeference} from "../../lib/formats/geotiff-read.ts";
import {doubles, encodeDirectory, longs, shorts, type TagToWrite} from "../../lib/formats/tiff-directory-write.ts";
import {TAG} from "../../lib/formats/tiff-tags.ts";

/** EPSG:32755, pixels of 50 × 25 m from (500000, 7000000). */
export const GEOREFERENCE: Georeference = {
  modelPixelScale: [50, 25, 0],
  modelTiepoint: [0, 0, 0, 500_000, 7_000_000, 0],
  modelTransformation: [],
  geoKeyDirectory: [1, 1, 0, 4, 1024, 0, 1, 1, 1025, 0, 1, 1, 1026, 34737, 9, 0, 3072, 0, 1, 32755],
  geoDoubleParams: [],
  geoAsciiParams: "UTM 55 S|",
};

const HEADER = 8;

/** The tags of a georeferenced float32 grid in one strip that stands right after the header. */
export const plainTags = (width: number, height: number): TagToWrite[] => [
  longs(TAG.imageWidth, width),
  longs(TAG.imageLength, height),
  shorts(TAG.bitsPerSample, 32),
  shorts(TAG.compression, 1),
  shorts(TAG.photometric, 1),
  longs(TAG.stripOffsets, HEADER),
  shorts(TAG.samplesPerPixel, 1),
  longs(TAG.rowsPerStrip, height),
  longs(TAG.stripByteCounts, 4 * width * height),
  shorts(TAG.sampleFormat, 3),
  doubles(TAG.modelPixelScale, GEOREFERENCE.modelPixelScale),
  doubles(TAG.modelTiepoint, GEOREFERENCE.modelTiepoint),
  shorts(TAG.geoKeyDirectory, ...GEOREFERENCE.geoKeyDirectory),
];

/** Header, data, then the directory; `changes` replace tags, and drop those without values. */
export function tiffBytes(
  tags: readonly TagToWrite[],
  data: Uint8Array,
  changes: readonly TagToWrite[] = [],
): Uint8Array {
  const changed = new Map([...tags, ...changes].map((each) => [each.tag, each]));
  const kept = [...changed.values()].filter(({values}) => values.length > 0);
  const at = HEADER + data.length + (data.length & 1);
  const directory = encodeDirectory(kept, at, 0, false);
  const bytes = new Uint8Array(at + directory.length);
  const view = new DataView(bytes.buffer);
  view.setUint16(0, 0x4949);
  view.setUint16(2, 42, true);
  view.setUint32(4, at, true);
  bytes.set(data, HEADER);
  bytes.set(directory, at);
  return bytes;
}

/** Little-endian bytes of float32 numbers. */
export function floatBytes(values: readonly number[]): Uint8Array {
  const view = new DataView(new ArrayBuffer(4 * values.length));
  for (const [i, value] of values.entries()) view.setFloat32(4 * i, value, true);
  return new Uint8Array(view.buffer);
}
