/** One block (tile or strip) of a TIFF image, from compressed bytes to readings. Predictors and most decoders are geotiff's. */
import {inflateSync} from "node:zlib";
import {InputError} from "../errors.ts";
import {decodeLzw} from "./lzw.ts";
import type {NodataRange} from "./nodata.ts";
import {readWithin, type TiffFile} from "./tiff-directory.ts";
import {decodedBytes, type SampleType, type TiffLayout} from "./tiff-layout.ts";
import {COMPRESSION} from "./tiff-tags.ts";

export type Samples =
  | Uint8Array
  | Uint16Array
  | Uint32Array
  | Int8Array
  | Int16Array
  | Int32Array
  | Float32Array
  | Float64Array;

const VIEW: Readonly<Record<SampleType, new (buffer: ArrayBuffer, offset: number, length: number) => Samples>> = {
  uint8: Uint8Array,
  uint16: Uint16Array,
  uint32: Uint32Array,
  int8: Int8Array,
  int16: Int16Array,
  int32: Int32Array,
  float32: Float32Array,
  float64: Float64Array,
};

const HOST_IS_LITTLE_ENDIAN = new Uint8Array(Uint16Array.of(1).buffer)[0] === 1;

/** Gives the samples of a block by its index, or undefined when it was never written. */
export type BlockReader = (index: number) => Promise<Samples | undefined>;

/**
 * A reader of blocks. `samples[(row · blockWidth + column) · bands + band]`, or without
 * bands when the image is not interleaved.
 *
 * @throws {InputError} from the reader: `raster/corrupt-block`, `raster/truncated`
 */
export async function blockReader(file: TiffFile, layout: TiffLayout): Promise<BlockReader> {
  const {compression, interleaved, bytesPerSample} = layout;
  const parameters = {
    tileWidth: layout.blockWidth,
    tileHeight: layout.blockHeight,
    predictor: layout.predictor,
    bitsPerSample: new Array<number>(layout.bands).fill(8 * bytesPerSample),
    planarConfiguration: interleaved ? 1 : 2,
  };
  const limit = decodedBytes(layout, 0);
  // Both stop at the size a block may have, whatever the bytes claim; Node's inflate is also the faster one.
  const inflate = (bytes: Uint8Array) => inflateSync(bytes, {maxOutputLength: limit});
  const own: Readonly<Record<number, (bytes: Uint8Array) => Uint8Array>> = {
    [COMPRESSION.deflate]: inflate,
    [COMPRESSION.oldDeflate]: inflate,
    [COMPRESSION.lzw]: (bytes) => decodeLzw(bytes, limit),
  };
  const {decoderFor, ownBuffer} = await import("./tiff-decoder.ts");
  const decoder = await decoderFor(compression, parameters, own[compression]);
  const swap = file.littleEndian !== HOST_IS_LITTLE_ENDIAN;
  const perBand = layout.blocksAcross * layout.blocksDown;
  return async (index) => {
    const length = layout.byteCounts[index]!;
    if (length === 0) return undefined;
    const what = `${layout.tiled ? "tile" : "strip"} ${index + 1}`;
    const bytes = await readWithin(file.source, layout.offsets[index]!, length, what);
    const expected = decodedBytes(layout, Math.floor((index % perBand) / layout.blocksAcross));
    const corrupt = (reason: string, cause?: unknown) =>
      new InputError(
        "raster/corrupt-block",
        `${file.source.name}: ${what} does not decode (${reason}); ${expected} bytes of pixels were needed. The file is damaged: copy or export it again.`,
        {place: {file: file.source.name}, cause},
      );
    let decoded: ArrayBufferLike;
    try {
      decoded = await decoder.decode(ownBuffer(bytes));
    } catch (error) {
      throw corrupt(error instanceof Error ? error.message : String(error), error);
    }
    if (decoded.byteLength < expected) throw corrupt(`it gives ${decoded.byteLength} bytes`);
    if (swap) swapInPlace(decoded as ArrayBuffer, bytesPerSample);
    return new VIEW[layout.sampleType](decoded as ArrayBuffer, 0, expected / bytesPerSample);
  };
}

function swapInPlace(buffer: ArrayBuffer, bytesPerSample: number): void {
  const bytes = Buffer.from(buffer, 0, buffer.byteLength - (buffer.byteLength % bytesPerSample));
  if (bytesPerSample === 2) bytes.swap16();
  if (bytesPerSample === 4) bytes.swap32();
  if (bytesPerSample === 8) bytes.swap64();
}

/** From a stored value to a reading: nodata becomes NaN, the rest scale · stored + offset. */
export interface Reading {
  readonly nodata: NodataRange;
  readonly scale: number;
  readonly offset: number;
}

/** A rectangle of samples, by the index of its first and the steps from row to row and column to column. */
export interface Window {
  readonly start: number;
  readonly rowStep: number;
  readonly columnStep: number;
}

/**
 * Copies rows × columns samples as readings; `samples` undefined stands for a block
 * that was never written, all NaN. Must not alias.
 *
 * @returns the row · columns + column of the first infinite reading, or -1
 */
export function copyReadings(
  target: Float64Array,
  to: Window,
  samples: Samples | undefined,
  from: Window,
  rows: number,
  columns: number,
  reading: Reading,
): number {
  const {
    nodata: {low, high},
    scale,
    offset,
  } = reading;
  let infinite = -1;
  for (let row = 0; row < rows; ++row) {
    let t = to.start + row * to.rowStep;
    let s = from.start + row * from.rowStep;
    for (let column = 0; column < columns; ++column) {
      const stored = samples === undefined ? Number.NaN : samples[s]!;
      const value = stored >= low && stored <= high ? Number.NaN : scale * stored + offset;
      if (infinite < 0 && (value === Number.POSITIVE_INFINITY || value === Number.NEGATIVE_INFINITY))
        infinite = row * columns + column;
      target[t] = value;
      t += to.columnStep;
      s += from.columnStep;
    }
  }
  return infinite;
}
