/**
 * A GeoTIFF as a grid of readings with its place on the map, read a window at a time:
 * memory is independent of the number of rows.
 */
import {InputError} from "../errors.ts";
import {doubt, type Notice} from "../notice.ts";
import {type Affine, affineOf, type ModelTags} from "./affine.ts";
import type {ByteSource} from "./byte-source.ts";
import {bandMetadata} from "./gdal-metadata.ts";
import {crsOf, type GeoKeyTags, type RasterCrs} from "./geokeys.ts";
import {nodataNumber, nodataRange} from "./nodata.ts";
import {type BlockReader, blockReader, copyReadings, type Reading, type Samples} from "./tiff-block.ts";
import {openTiff, type TiffFile, tagNumbers, tagText} from "./tiff-directory.ts";
import {layoutOf, type SampleType, type TiffLayout} from "./tiff-layout.ts";
import {TAG} from "./tiff-tags.ts";

/** The georeferencing tags, to be copied into another file as they are. */
export interface Georeference extends ModelTags, GeoKeyTags {}

interface RowBlock {
  /** 0-based. */
  readonly row0: number;
  readonly rows: number;
  /** rows × width, row by row; NaN where there is no value. */
  readonly values: Float64Array;
}

interface ColumnBlock {
  /** 0-based. */
  readonly column0: number;
  readonly columns: number;
  /** columns × height, column by column; NaN where there is no value. */
  readonly values: Float64Array;
}

export interface Raster {
  readonly name: string;
  readonly width: number;
  readonly height: number;
  readonly bands: number;
  /** The band that is read, from 1. */
  readonly band: number;
  readonly sampleType: SampleType;
  readonly affine: Affine;
  readonly crs: RasterCrs;
  readonly georeference: Georeference;
  /** As a number, and as it is written in the file. */
  readonly nodata: number | undefined;
  readonly nodataText: string | undefined;
  readonly unit: string | undefined;
  readonly description: string | undefined;
  readonly notices: readonly Notice[];
  /** All rows in order, from the top at every call; `values` is new in each block. */
  rowBlocks(): AsyncIterable<RowBlock>;
  /**
   * All columns in order, from the left at every call. A striped file is read through
   * once for every window of columns, a tiled one once altogether if a window holds a tile.
   */
  columnBlocks(windowBytes?: number): AsyncIterable<ColumnBlock>;
  /** A part of the grid, row by row; NaN where there is no value. It must lie inside. */
  window(part: Rectangle): Promise<Float64Array>;
}

/** Pixels of a grid, 0-based. */
interface Rectangle {
  readonly row0: number;
  readonly rows: number;
  readonly column0: number;
  readonly columns: number;
}

/** Bytes of a block of rows from a striped file, about, two of which are held; and rows it holds at least, where strips are thin. */
const ROW_WINDOW_BYTES = 2 ** 24;
const LEAST_ROWS = 64;
const MOST_ROWS = 256;
const COLUMN_WINDOW_BYTES = 2 ** 26;
/** A grid whose pixels take no more than this is decoded once, however often it is walked. */
const KEPT_BYTES = 2 ** 25;
/** Blocks read and inflated at a time. */
const ABREAST = 8;

/**
 * Opens a grid and checks all that can be checked without decoding pixels.
 *
 * @param options.band from 1
 * @throws {InputError} `raster/not-tiff`, `raster/truncated`, `raster/implausible-size`,
 *   `raster/block-too-large`, `raster/empty`, `raster/sample-type`, `raster/picture`,
 *   `raster/compression`, `raster/predictor`, `raster/big-endian-predictor`,
 *   `raster/no-georeference`, `raster/rotated`, `raster/no-band`; reading blocks throws
 *   `raster/corrupt-block`, `raster/infinite`
 */
export async function openRaster(source: ByteSource, options: {readonly band?: number} = {}): Promise<Raster> {
  const file = await openTiff(source);
  const layout = await layoutOf(file);
  const band = options.band ?? 1;
  if (!(Number.isInteger(band) && band >= 1 && band <= layout.bands))
    throw new InputError(
      "raster/no-band",
      `${source.name} has ${layout.bands} band${layout.bands === 1 ? "" : "s"}; there is no band ${band}. Choose one from 1 to ${layout.bands}.`,
      {place: {file: source.name}},
    );
  const georeference = await georeferenceOf(file);
  const crs = crsOf(georeference);
  const {affine, notices: doubts} = affineOf(georeference, crs.pixelIsPoint, layout, source.name);
  const notices = [...doubts];
  if (file.hasMask)
    notices.push(
      doubt(
        "raster/mask-ignored",
        `${source.name} holds a transparency mask, which is not read: pixels that it hides count as readings unless they are nodata. Declare nodata instead: gdalwarp -dstnodata.`,
        {file: source.name},
      ),
    );
  const nodataText = await tagText(file, TAG.gdalNodata);
  const nodata = nodataNumber(nodataText);
  const metadata = bandMetadata((await tagText(file, TAG.gdalMetadata)) ?? "", band - 1);
  const reading: Reading = {
    nodata: nodataRange(nodata, layout.sampleType === "float32"),
    scale: metadata.scale,
    offset: metadata.offset,
  };
  const read = decodedOnce(await blockReader(file, layout), layout);
  const grid: Grid = {name: source.name, layout, band: band - 1, reading, read};
  return {
    name: source.name,
    width: layout.width,
    height: layout.height,
    bands: layout.bands,
    band,
    sampleType: layout.sampleType,
    affine,
    crs,
    georeference,
    nodata,
    nodataText,
    unit: metadata.unit,
    description: metadata.description,
    notices,
    rowBlocks: () => rowBlocks(grid),
    columnBlocks: (windowBytes = COLUMN_WINDOW_BYTES) => columnBlocks(grid, windowBytes),
    window: (part) =>
      fillWindow(grid, new Float64Array(part.rows * part.columns), part, {rowStep: part.columns, columnStep: 1}),
  };
}

interface Grid {
  readonly name: string;
  readonly layout: TiffLayout;
  /** From 0. */
  readonly band: number;
  readonly reading: Reading;
  readonly read: BlockReader;
}

async function georeferenceOf(file: TiffFile): Promise<Georeference> {
  const ascii = await tagNumbers(file, TAG.geoAsciiParams);
  return {
    modelPixelScale: await tagNumbers(file, TAG.modelPixelScale),
    modelTiepoint: await tagNumbers(file, TAG.modelTiepoint),
    modelTransformation: await tagNumbers(file, TAG.modelTransformation),
    geoKeyDirectory: await tagNumbers(file, TAG.geoKeyDirectory),
    geoDoubleParams: await tagNumbers(file, TAG.geoDoubleParams),
    // Byte by byte: key locations count bytes, whatever they encode.
    geoAsciiParams: Buffer.from(ascii).toString("latin1").replace(/\0+$/, ""),
  };
}

/** While one block of rows is used the next one is read. */
async function* rowBlocks(grid: Grid): AsyncGenerator<RowBlock> {
  const {width, height, blockHeight} = grid.layout;
  const wanted = Math.min(MOST_ROWS, Math.max(LEAST_ROWS, Math.floor(ROW_WINDOW_BYTES / (8 * width))));
  const step = blockHeight * Math.max(1, Math.floor(wanted / blockHeight));
  const blockAt = async (row0: number): Promise<RowBlock> => {
    const rows = Math.min(step, height - row0);
    const values = new Float64Array(rows * width);
    await fillWindow(grid, values, {row0, rows, column0: 0, columns: width}, {rowStep: width, columnStep: 1});
    return {row0, rows, values};
  };
  let next: Promise<RowBlock> | undefined = blockAt(0);
  for (let row0 = 0; next !== undefined; row0 += step) {
    const block: RowBlock = await next;
    next = row0 + step < height ? blockAt(row0 + step) : undefined;
    // Whoever walks no further never asks what became of it.
    next?.catch(() => undefined);
    yield block;
  }
}

async function* columnBlocks(grid: Grid, windowBytes: number): AsyncGenerator<ColumnBlock> {
  const {width, height, blockWidth, tiled} = grid.layout;
  const affordable = Math.max(1, Math.floor(windowBytes / (8 * height)));
  // Whole tiles where they fit: a tile that two windows share is decoded twice.
  const step = tiled && affordable > blockWidth ? affordable - (affordable % blockWidth) : affordable;
  for (let column0 = 0; column0 < width; column0 += step) {
    const columns = Math.min(step, width - column0);
    const values = new Float64Array(columns * height);
    await fillWindow(grid, values, {row0: 0, rows: height, column0, columns}, {rowStep: 1, columnStep: height});
    yield {column0, columns, values};
  }
}

/** Decodes the blocks that meet a window, some at a time, and copies their part of it; @returns `target` */
async function fillWindow(
  grid: Grid,
  target: Float64Array,
  window: Rectangle,
  steps: {readonly rowStep: number; readonly columnStep: number},
): Promise<Float64Array> {
  const {layout, band, reading} = grid;
  const {blockWidth, blockHeight, blocksAcross, blocksDown, interleaved, bands} = layout;
  const pixelStep = interleaved ? bands : 1;
  const firstBlock = interleaved ? 0 : band * blocksAcross * blocksDown;
  const rowEnd = window.row0 + window.rows;
  const columnEnd = window.column0 + window.columns;
  const blocks: {readonly down: number; readonly across: number}[] = [];
  for (let down = Math.floor(window.row0 / blockHeight); down * blockHeight < rowEnd; ++down)
    for (let across = Math.floor(window.column0 / blockWidth); across * blockWidth < columnEnd; ++across)
      blocks.push({down, across});
  const begun: Promise<Samples | undefined>[] = [];
  let next = 0;
  for (const {down, across} of blocks) {
    for (; next < blocks.length && begun.length < ABREAST; ++next) {
      const ahead = blocks[next]!;
      const decoded = grid.read(firstBlock + ahead.down * blocksAcross + ahead.across);
      // What is wrong with it is told in its turn, if no block before it is wrong.
      decoded.catch(() => undefined);
      begun.push(decoded);
    }
    const samples = await begun.shift();
    const row = Math.max(window.row0, down * blockHeight);
    const column = Math.max(window.column0, across * blockWidth);
    const rows = Math.min(rowEnd, (down + 1) * blockHeight) - row;
    const columns = Math.min(columnEnd, (across + 1) * blockWidth) - column;
    const to = {start: (row - window.row0) * steps.rowStep + (column - window.column0) * steps.columnStep, ...steps};
    const inBlock = (row - down * blockHeight) * blockWidth + (column - across * blockWidth);
    const from = {
      start: inBlock * pixelStep + (interleaved ? band : 0),
      rowStep: blockWidth * pixelStep,
      columnStep: pixelStep,
    };
    const infinite = copyReadings(target, to, samples, from, rows, columns, reading);
    if (infinite >= 0)
      throw infiniteReading(grid.name, row + Math.floor(infinite / columns), column + (infinite % columns));
  }
  return target;
}

/** Keeps the blocks of a small grid. */
function decodedOnce(read: BlockReader, {width, height, bands, bytesPerSample}: TiffLayout): BlockReader {
  if (width * height * bands * bytesPerSample > KEPT_BYTES) return read;
  const kept = new Map<number, Promise<Samples | undefined>>();
  return (index) => {
    const found = kept.get(index) ?? read(index);
    kept.set(index, found);
    return found;
  };
}

const infiniteReading = (file: string, row: number, column: number): InputError =>
  new InputError(
    "raster/infinite",
    `${file}, grid row ${row + 1}, column ${column + 1} (from the upper left) is infinite; a finite reading or nodata was needed. Declare it as nodata with gdal_edit.py -a_nodata, or replace it.`,
    {place: {file, row: row + 1, column: String(column + 1)}},
  );
