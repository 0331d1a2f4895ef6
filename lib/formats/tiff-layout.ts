/**
 * How the pixels of a TIFF image are stored, checked before anything is allocated: what
 * the tags claim must fit the file, and one block must fit memory.
 */
import {InputError} from "../errors.ts";
import {type TiffFile, tagNumbers, truncated} from "./tiff-directory.ts";
import {COMPRESSION, TAG} from "./tiff-tags.ts";

export type SampleType = "uint8" | "uint16" | "uint32" | "int8" | "int16" | "int32" | "float32" | "float64";

export interface TiffLayout {
  readonly width: number;
  readonly height: number;
  readonly bands: number;
  readonly sampleType: SampleType;
  readonly bytesPerSample: number;
  readonly compression: number;
  readonly predictor: number;
  /** Whether a block holds all bands, pixel by pixel, or one band. */
  readonly interleaved: boolean;
  readonly tiled: boolean;
  /** A strip is a block as wide as the image. */
  readonly blockWidth: number;
  readonly blockHeight: number;
  readonly blocksAcross: number;
  readonly blocksDown: number;
  /** By block, row by row, and band by band when not interleaved; 0 bytes: a block that was never written. */
  readonly offsets: readonly number[];
  readonly byteCounts: readonly number[];
}

/**
 * The largest decoded size of a byte: 1032 is deflate's limit (zlib's technical notes), 64
 * packbits' (128 bytes from 2), 2730 lzw's (a 12-bit code for at most 4096 bytes); ZSTD has
 * none worth checking. LERC is left out on purpose: geotiff 3.0.5 decodes its NaN pixels as 0
 * (tried with GDAL's files: lossless float32 with nodata NaN).
 */
const LARGEST_RATIO: Readonly<Record<number, number>> = {
  [COMPRESSION.none]: 1,
  [COMPRESSION.packbits]: 64,
  [COMPRESSION.lzw]: 2731,
  [COMPRESSION.deflate]: 1033,
  [COMPRESSION.oldDeflate]: 1033,
  [COMPRESSION.zstd]: Number.POSITIVE_INFINITY,
};
/** Only these apply the predictor tag. */
const PREDICTED: readonly number[] = [COMPRESSION.lzw, COMPRESSION.deflate, COMPRESSION.oldDeflate, COMPRESSION.zstd];
/** Bytes of one decoded block, and of one row of blocks as float64. */
const BLOCK_LIMIT = 2 ** 28;
const BLOCK_ROW_LIMIT = 2 ** 30;
/** Rows read at a time from an uncompressed image in one strip. */
const SPLIT_ROWS = 64;

/**
 * @throws {InputError} `raster/truncated`, `raster/implausible-size`, `raster/block-too-large`,
 *   `raster/empty`, `raster/sample-type`, `raster/picture`, `raster/compression`,
 *   `raster/predictor`, `raster/big-endian-predictor`
 */
export async function layoutOf(file: TiffFile): Promise<TiffLayout> {
  const name = file.source.name;
  const one = async (tag: number, otherwise: number) => (await tagNumbers(file, tag))[0] ?? otherwise;
  const width = await one(TAG.imageWidth, 0);
  const height = await one(TAG.imageLength, 0);
  const bands = await one(TAG.samplesPerPixel, 1);
  if (!(width >= 1 && height >= 1 && bands >= 1 && bands <= 65535))
    throw truncated(file.source, `it claims ${width} × ${height} pixels of ${bands} bands`);
  const {sampleType, bytesPerSample} = await sampleTypeOf(file, bands);
  const compression = await one(TAG.compression, COMPRESSION.none);
  if (!(compression in LARGEST_RATIO))
    throw new InputError(
      "raster/compression",
      `${name} is compressed by method ${compression}, which is not read or not exact; none, LZW, DEFLATE, PACKBITS or ZSTD was needed. Convert it with: gdal_translate -co COMPRESS=DEFLATE.`,
      {place: {file: name}},
    );
  const predictor = PREDICTED.includes(compression) ? await one(TAG.predictor, 1) : 1;
  checkPredictor(file, predictor, sampleType);
  const interleaved = (await one(TAG.planarConfiguration, 1)) === 1 || bands === 1;
  const tiled = file.main.entries.has(TAG.tileOffsets);
  const blockWidth = tiled ? await one(TAG.tileWidth, 0) : width;
  const rowsPerStrip = await one(TAG.rowsPerStrip, height);
  const blockHeight = tiled ? await one(TAG.tileLength, 0) : Math.min(rowsPerStrip, height);
  if (!(blockWidth >= 1 && blockHeight >= 1))
    throw truncated(file.source, `its blocks claim ${blockWidth} × ${blockHeight} pixels`);
  const layout: TiffLayout = {
    width,
    height,
    bands,
    sampleType,
    bytesPerSample,
    compression,
    predictor,
    interleaved,
    tiled,
    blockWidth,
    blockHeight,
    blocksAcross: Math.ceil(width / blockWidth),
    blocksDown: Math.ceil(height / blockHeight),
    offsets: await tagNumbers(file, tiled ? TAG.tileOffsets : TAG.stripOffsets),
    byteCounts: await tagNumbers(file, tiled ? TAG.tileByteCounts : TAG.stripByteCounts),
  };
  checkBlocks(file, layout);
  const split = splitSingleStrip(layout);
  checkMemory(name, split);
  return split;
}

/** Samples in a block of this many rows. */
const samplesOf = (layout: TiffLayout, rows: number): number =>
  layout.blockWidth * rows * (layout.interleaved ? layout.bands : 1);

/** Rows stored in a block: tiles are always whole, the last strip need not be. */
function storedRows(layout: TiffLayout, blockRow: number): number {
  if (layout.tiled) return layout.blockHeight;
  return Math.min(layout.blockHeight, layout.height - blockRow * layout.blockHeight);
}

/** Bytes of a block when decoded. */
export const decodedBytes = (layout: TiffLayout, blockRow: number): number =>
  samplesOf(layout, storedRows(layout, blockRow)) * layout.bytesPerSample;

async function sampleTypeOf(file: TiffFile, bands: number) {
  const name = file.source.name;
  const bits = await tagNumbers(file, TAG.bitsPerSample);
  const formats = await tagNumbers(file, TAG.sampleFormat);
  const [bit = 1, format = 1] = [bits[0], formats[0]];
  const photometric = (await tagNumbers(file, TAG.photometric))[0] ?? 1;
  if (photometric === 3 || photometric === 6 || (photometric === 2 && bit === 8))
    throw new InputError(
      "raster/picture",
      `${name} is a picture (colours, not readings); a grid of numbers was needed. Export the grid itself as a float32 GeoTIFF.`,
      {place: {file: name}},
    );
  const prefix = {1: "uint", 2: "int", 3: "float"}[format];
  const allowed = format === 3 ? [32, 64] : [8, 16, 32];
  const alike = bits.slice(0, bands).every((each) => each === bit) && formats.every((each) => each === format);
  if (prefix === undefined || !allowed.includes(bit) || !alike)
    throw new InputError(
      "raster/sample-type",
      `${name} stores samples of ${bits.join("/") || 1} bits in format ${formats.join("/") || 1} (1 unsigned, 2 signed, 3 float, 5 and 6 complex); one of int8 to int32, uint8 to uint32, float32 or float64 for all bands was needed. Convert it with: gdal_translate -ot Float32.`,
      {place: {file: name}},
    );
  return {sampleType: `${prefix}${bit}` as SampleType, bytesPerSample: bit / 8};
}

function checkPredictor(file: TiffFile, predictor: number, sampleType: SampleType): void {
  if (predictor === 1) return;
  const place = {file: file.source.name};
  // geotiff 3.0.5 undoes both predictors as if the file were little-endian: every pixel comes out wrong.
  if (!file.littleEndian)
    throw new InputError(
      "raster/big-endian-predictor",
      `${place.file} is big-endian with predictor ${predictor}, which cannot be read exactly; little-endian or no predictor was needed. Convert it with: gdal_translate -co ENDIANNESS=LITTLE.`,
      {place},
    );
  const isFloat = sampleType.startsWith("float");
  if ((predictor === 2 && sampleType !== "float64") || (predictor === 3 && isFloat)) return;
  throw new InputError(
    "raster/predictor",
    `${place.file} stores ${sampleType} with predictor ${predictor}, which is not read; predictor 1, 2 (up to 32 bits) or 3 (floats) was needed. Convert it with: gdal_translate -co PREDICTOR=1.`,
    {place},
  );
}

function checkBlocks(file: TiffFile, layout: TiffLayout): void {
  const {source} = file;
  const {width, height, offsets, byteCounts, blocksAcross, blocksDown, tiled} = layout;
  const expected = blocksAcross * blocksDown * (layout.interleaved ? 1 : layout.bands);
  const kind = tiled ? "tile" : "strip";
  const implausible = (found: string): InputError =>
    new InputError(
      "raster/implausible-size",
      `${source.name} claims ${width} × ${height} pixels, but ${found}; the file (${source.size} bytes) cannot hold them. Export the grid again.`,
      {place: {file: source.name}},
    );
  if (offsets.length < expected || byteCounts.length < expected)
    throw implausible(`lists ${Math.min(offsets.length, byteCounts.length)} of ${expected} ${kind}s`);
  const ratio = LARGEST_RATIO[layout.compression]!;
  let written = 0;
  for (let i = 0; i < expected; ++i) {
    const bytes = byteCounts[i]!;
    if (bytes === 0) continue;
    ++written;
    const end = offsets[i]! + bytes;
    const blockRow = Math.floor((i % (blocksAcross * blocksDown)) / blocksAcross);
    const firstRow = blockRow * layout.blockHeight;
    const decoded = decodedBytes(layout, blockRow);
    if (decoded > ratio * (bytes + 16)) throw implausible(`${kind} ${i + 1} has ${bytes} bytes for ${decoded}`);
    if (!(end <= source.size))
      throw truncated(
        source,
        `${kind} ${i + 1} of ${expected} (grid rows from ${firstRow + 1} on) ends at byte ${end}, the file at byte ${source.size}`,
      );
  }
  if (written === 0)
    throw new InputError(
      "raster/empty",
      `${source.name} holds no pixels: none of its ${expected} ${kind}s was ever written. Export the grid again.`,
      {place: {file: source.name}},
    );
}

/** An uncompressed image in one strip can be read a few rows at a time. */
function splitSingleStrip(layout: TiffLayout): TiffLayout {
  const {tiled, compression, blocksDown, interleaved, height, offsets} = layout;
  if (tiled || compression !== COMPRESSION.none || blocksDown !== 1 || height <= SPLIT_ROWS) return layout;
  const rowBytes = samplesOf(layout, 1) * layout.bytesPerSample;
  const pieces = Math.ceil(height / SPLIT_ROWS);
  const split: {offsets: number[]; byteCounts: number[]} = {offsets: [], byteCounts: []};
  for (let band = 0; band < (interleaved ? 1 : layout.bands); ++band)
    for (let piece = 0; piece < pieces; ++piece) {
      const row = piece * SPLIT_ROWS;
      const isWritten = layout.byteCounts[band]! > 0;
      split.offsets.push(offsets[band]! + row * rowBytes);
      split.byteCounts.push(isWritten ? Math.min(SPLIT_ROWS, height - row) * rowBytes : 0);
    }
  return {...layout, ...split, blockHeight: SPLIT_ROWS, blocksDown: pieces};
}

function checkMemory(name: string, layout: TiffLayout): void {
  const block = decodedBytes(layout, 0);
  const row = layout.blocksAcross * layout.blockWidth * layout.blockHeight * 8;
  if (block <= BLOCK_LIMIT && row <= BLOCK_ROW_LIMIT) return;
  throw new InputError(
    "raster/block-too-large",
    `${name} (${layout.width} × ${layout.height} pixels) is stored in blocks of ${layout.blockWidth} × ${layout.blockHeight} pixels, too large to read a part at a time. Store it in tiles: gdal_translate -co TILED=YES.`,
    {place: {file: name}},
  );
}
