/**
 * The directories of a TIFF or BigTIFF file, of either byte order. Nothing is read
 * outside the file and nothing is allocated before its size is checked against the
 * file's. geotiff has a reader of its own, but it takes large tag arrays of big-endian
 * files for little-endian ones and trusts every count.
 */
import {InputError} from "../errors.ts";
import type {ByteSource} from "./byte-source.ts";
import {FIELD_SIZE, TAG} from "./tiff-tags.ts";

interface Entry {
  readonly type: number;
  readonly count: number;
  /** Where the values stand in the file. */
  readonly offset: number;
}

interface TiffDirectory {
  readonly entries: ReadonlyMap<number, Entry>;
}

export interface TiffFile {
  readonly source: ByteSource;
  readonly littleEndian: boolean;
  /** The main image. */
  readonly main: TiffDirectory;
  /** Whether a later directory holds a transparency mask. */
  readonly hasMask: boolean;
}

/** Directories followed before the chain is taken for damaged; overviews and masks need some tens. */
const DIRECTORY_LIMIT = 256;

/** @throws {InputError} `raster/not-tiff`, `raster/truncated` */
export async function openTiff(source: ByteSource): Promise<TiffFile> {
  const head = viewOf(await source.read(0, Math.min(16, source.size)));
  const mark = head.byteLength >= 8 ? head.getUint16(0) : 0;
  const littleEndian = mark === 0x4949;
  const version = head.byteLength >= 8 ? head.getUint16(2, littleEndian) : 0;
  const big = version === 43 && head.byteLength === 16 && head.getUint16(4, littleEndian) === 8;
  if (!((mark === 0x4949 || mark === 0x4d4d) && (version === 42 || big)))
    throw new InputError(
      "raster/not-tiff",
      `${source.name} does not begin like a TIFF file; a GeoTIFF was needed. Convert the grid with: gdal_translate -of GTiff.`,
      {place: {file: source.name}},
    );
  let next = big ? Number(head.getBigUint64(8, littleEndian)) : head.getUint32(4, littleEndian);
  let main: TiffDirectory | undefined;
  let hasMask = false;
  const seen = new Set<number>();
  while (next !== 0 && !seen.has(next) && seen.size < DIRECTORY_LIMIT) {
    seen.add(next);
    const read = await readDirectory(source, next, littleEndian, big);
    if (main === undefined) main = read.directory;
    else {
      const file = {source, littleEndian, main, hasMask};
      const kind = await tagNumbers(file, TAG.newSubfileType, read.directory);
      if (((kind[0] ?? 0) & 4) !== 0) hasMask = true;
    }
    next = read.next;
  }
  if (main === undefined) throw truncated(source, "its header names no image directory");
  return {source, littleEndian, main, hasMask};
}

async function readDirectory(source: ByteSource, offset: number, littleEndian: boolean, big: boolean) {
  const [countSize, entrySize, inline, nextSize] = big ? [8, 20, 8, 8] : [2, 12, 4, 4];
  const what = `the image directory at byte ${offset}`;
  const countView = viewOf(await readWithin(source, offset, countSize, what));
  const count = big ? Number(countView.getBigUint64(0, littleEndian)) : countView.getUint16(0, littleEndian);
  const body = viewOf(await readWithin(source, offset + countSize, count * entrySize + nextSize, what));
  const long = (at: number) => (big ? Number(body.getBigUint64(at, littleEndian)) : body.getUint32(at, littleEndian));
  const entries = new Map<number, Entry>();
  for (let i = 0; i < count; ++i) {
    const at = i * entrySize;
    const type = body.getUint16(at + 2, littleEndian);
    const values = long(at + 4);
    const valueAt = at + entrySize - inline;
    const size = FIELD_SIZE[type] ?? 0;
    if (size === 0) continue; // An unknown field type is to be skipped (TIFF 6.0, section 2).
    const place = size * values <= inline ? offset + countSize + valueAt : long(valueAt);
    entries.set(body.getUint16(at, littleEndian), {type, count: values, offset: place});
  }
  return {directory: {entries}, next: long(count * entrySize)};
}

/**
 * The values of a numeric tag; empty when the tag is absent.
 * @throws {InputError} `raster/truncated`
 */
export async function tagNumbers(file: TiffFile, tag: number, directory = file.main): Promise<number[]> {
  const entry = directory.entries.get(tag);
  if (entry === undefined) return [];
  const {type, count} = entry;
  const size = FIELD_SIZE[type]!;
  const view = viewOf(await readWithin(file.source, entry.offset, count * size, `tag ${tag}`));
  const read = readers[type];
  if (read === undefined) return [];
  const values = new Array<number>(count);
  for (let i = 0; i < count; ++i) values[i] = read(view, i * size, file.littleEndian);
  return values;
}

/** The text of an ASCII tag without its final NUL; undefined when absent. */
export async function tagText(file: TiffFile, tag: number): Promise<string | undefined> {
  const entry = file.main.entries.get(tag);
  if (entry === undefined) return undefined;
  const bytes = await readWithin(file.source, entry.offset, entry.count * FIELD_SIZE[entry.type]!, `tag ${tag}`);
  return Buffer.from(bytes).toString("utf8").replace(/\0+$/, "");
}

type Reader = (view: DataView, offset: number, littleEndian: boolean) => number;
const readers: Readonly<Record<number, Reader>> = {
  1: (view, at) => view.getUint8(at),
  2: (view, at) => view.getUint8(at),
  3: (view, at, little) => view.getUint16(at, little),
  4: (view, at, little) => view.getUint32(at, little),
  6: (view, at) => view.getInt8(at),
  7: (view, at) => view.getUint8(at),
  8: (view, at, little) => view.getInt16(at, little),
  9: (view, at, little) => view.getInt32(at, little),
  11: (view, at, little) => view.getFloat32(at, little),
  12: (view, at, little) => view.getFloat64(at, little),
  13: (view, at, little) => view.getUint32(at, little),
  16: (view, at, little) => Number(view.getBigUint64(at, little)),
  17: (view, at, little) => Number(view.getBigInt64(at, little)),
  18: (view, at, little) => Number(view.getBigUint64(at, little)),
};

const viewOf = (bytes: Uint8Array): DataView => new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);

/**
 * Bytes that must be in the file.
 * @throws {InputError} `raster/truncated`
 */
export async function readWithin(
  source: ByteSource,
  offset: number,
  length: number,
  what: string,
): Promise<Uint8Array> {
  if (!(offset >= 0 && offset + length <= source.size))
    throw truncated(source, `${what} needs bytes ${offset} to ${offset + length}, the file has ${source.size}`);
  const bytes = await source.read(offset, length);
  if (bytes.length < length) throw truncated(source, `${what} could not be read to its end`);
  return bytes;
}

export const truncated = (source: ByteSource, found: string): InputError =>
  new InputError(
    "raster/truncated",
    `${source.name} is cut short or damaged: ${found}. The whole file was needed: copy or export it again.`,
    {place: {file: source.name}},
  );
