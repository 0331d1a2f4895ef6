/**
 * A cloud-optimised GeoTIFF of float32 bands, written as rows come in. Compressed tiles
 * wait in a scratch store; at the end the file is laid out as readers over a network want
 * it: directories first, then overviews from the smallest on, the grid itself last.
 * Memory is independent of the height. The same rows give the same bytes.
 *
 * Sources: TIFF 6.0; BigTIFF; OGC 21-026 (cloud-optimised GeoTIFF); GDAL's description of
 * its COG driver for the header that announces the order and framing of blocks.
 */
import type {ByteSink, ScratchStore} from "./byte-source.ts";
import {type StoredTile, writeLayout} from "./cog-layout.ts";
import {type Level, levelSizes, makeLevels, pushRow} from "./cog-pyramid.ts";
import {cutTile, encodeTile, type Fill} from "./cog-tile.ts";
import {metadataXml} from "./gdal-metadata.ts";
import type {Georeference} from "./geotiff-read.ts";
import {nodataNumber} from "./nodata.ts";
import {ascii, doubles, longs, shorts, type TagToWrite} from "./tiff-directory-write.ts";
import {COMPRESSION, TAG} from "./tiff-tags.ts";

export interface CogSettings {
  readonly width: number;
  readonly height: number;
  /** One for each band, in order. */
  readonly bands: readonly {readonly description?: string; readonly unit?: string}[];
  /** Copied as it is. */
  readonly georeference: Georeference;
  /** As an input file wrote it; NaN when absent, or when float32 cannot hold it. */
  readonly nodataText?: string | undefined;
  /** Metadata of the file as a whole. */
  readonly items?: readonly (readonly [name: string, text: string])[];
  /** Bytes from which on a file is written as BigTIFF; below 4 GiB. */
  readonly bigFrom?: number;
}

export interface CogWriter {
  /**
   * Takes the next rows.
   * @param bands for each band, count × width values row by row; what is not finite has no value
   */
  writeRows(bands: readonly (Float32Array | Float64Array)[], count: number): Promise<void>;
  /**
   * Writes the file, once all rows are in.
   * @param bands of another file with the same pixels; absent: those of the settings
   */
  finish(sink: ByteSink, bands?: CogSettings["bands"]): Promise<void>;
}

const LARGE_TILE = 512;
const SMALL_TILE = 256;
/** Classic TIFF counts bytes in 32 bits; a margin as wide as any header. */
const BIG_FROM = 3.9 * 2 ** 30;
/** Bytes of tiles that wait to be compressed, about; the next row of tiles is begun meanwhile. */
const WAITING_BYTES = 2 ** 25;

/** Begins a file. Its tiles go to `scratch`, which must be empty and stay readable until `finish` is done. */
export function openCog(settings: CogSettings, scratch: ScratchStore): CogWriter {
  const {width, height} = settings;
  const bands = settings.bands.length;
  if (!(width >= 1 && height >= 1 && bands >= 1)) throw new RangeError(`a grid of ${width} × ${height} × ${bands}`);
  const tile = Math.max(width, height) > LARGE_TILE ? LARGE_TILE : SMALL_TILE;
  const fill = fillOf(settings.nodataText);
  const levels = makeLevels(levelSizes(width, height, LARGE_TILE), bands, tile);
  const stored: StoredTile[][] = levels.map(() => []);
  const row = new Float32Array(width * bands);
  let scratchBytes = 0;
  const atOnce = Math.max(4, Math.floor(WAITING_BYTES / (4 * tile * tile * bands)));
  /** Tiles on their way to the store, in its order. */
  const underWay: Promise<void>[] = [];
  let last = Promise.resolve();

  const store = async (encoded: Promise<Uint8Array>, before: Promise<void>, index: number): Promise<void> => {
    await before;
    const bytes = await encoded;
    await scratch.append(bytes);
    stored[index]!.push({offset: scratchBytes, bytes: bytes.length});
    scratchBytes += bytes.length;
  };

  const emptyTiles = async (level: Level, index: number): Promise<void> => {
    for (let across = 0; across < level.tilesAcross; ++across) {
      while (underWay.length >= atOnce) await underWay.shift();
      const pixels = cutTile(level.rows, level.held, level.width, across * tile, tile, bands, fill.value);
      last = store(encodeTile(pixels, tile, bands), last, index);
      // What goes wrong is told where the tile is waited for.
      last.catch(() => undefined);
      underWay.push(last);
    }
    level.held = 0;
  };

  return {
    async writeRows(values, count) {
      if (values.length !== bands || values.some((band) => band.length < count * width))
        throw new RangeError(`${count} rows of ${bands} bands by ${width} columns were needed`);
      if (levels[0]!.received + count > height) throw new RangeError(`more than ${height} rows`);
      for (let r = 0; r < count; ++r) {
        for (let band = 0; band < bands; ++band) {
          const from = values[band]!;
          for (let column = 0; column < width; ++column) {
            const value = Math.fround(from[r * width + column]!);
            row[column * bands + band] = Number.isFinite(value) ? value : Number.NaN;
          }
        }
        pushRow(levels, 0, row, bands);
        for (let index = 0; index < levels.length; ++index) {
          const level = levels[index]!;
          if (level.held === tile || (level.held > 0 && level.received === level.height))
            await emptyTiles(level, index);
        }
      }
    },
    async finish(sink, described = settings.bands) {
      await last;
      const named = {...settings, bands: described};
      if (levels[0]!.received !== height) throw new RangeError(`${levels[0]!.received} of ${height} rows were written`);
      const images = levels.map((level, index) => ({
        tags: index === 0 ? mainTags(named, level, tile, fill.text) : overviewTags(settings, level, tile, fill.text),
        tiles: stored[index]!,
      }));
      await writeLayout(images, scratch, sink, settings.bigFrom ?? BIG_FROM);
    },
  };
}

/** The input's nodata if float32 can hold it, else NaN. */
function fillOf(text: string | undefined): Fill {
  const value = nodataNumber(text);
  if (text === undefined || value === undefined) return {text: "nan", value: Number.NaN};
  if (!Number.isNaN(value) && !Number.isFinite(Math.fround(value))) return {text: "nan", value: Number.NaN};
  return {text: text.trim(), value: Math.fround(value)};
}

function overviewTags(settings: CogSettings, level: Level, tile: number, nodataText: string): TagToWrite[] {
  return [longs(TAG.newSubfileType, 1), ...imageTags(settings, level, tile, nodataText)];
}

function mainTags(settings: CogSettings, level: Level, tile: number, nodataText: string): TagToWrite[] {
  const tags = imageTags(settings, level, tile, nodataText);
  const place = settings.georeference;
  if (place.modelPixelScale.length > 0) tags.push(doubles(TAG.modelPixelScale, place.modelPixelScale));
  if (place.modelTiepoint.length > 0) tags.push(doubles(TAG.modelTiepoint, place.modelTiepoint));
  if (place.modelTransformation.length > 0) tags.push(doubles(TAG.modelTransformation, place.modelTransformation));
  if (place.geoKeyDirectory.length > 0) tags.push(shorts(TAG.geoKeyDirectory, ...place.geoKeyDirectory));
  if (place.geoDoubleParams.length > 0) tags.push(doubles(TAG.geoDoubleParams, place.geoDoubleParams));
  if (place.geoAsciiParams !== "") tags.push(ascii(TAG.geoAsciiParams, Buffer.from(place.geoAsciiParams, "latin1")));
  const xml = metadataXml({items: settings.items ?? [], bands: settings.bands});
  if (xml !== "") tags.push(ascii(TAG.gdalMetadata, Buffer.from(xml, "utf8")));
  return tags;
}

function imageTags(settings: CogSettings, level: Level, tile: number, nodataText: string): TagToWrite[] {
  const bands = settings.bands.length;
  const each = (value: number): number[] => new Array<number>(bands).fill(value);
  const tags = [
    longs(TAG.imageWidth, level.width),
    longs(TAG.imageLength, level.height),
    shorts(TAG.bitsPerSample, ...each(32)),
    shorts(TAG.compression, COMPRESSION.deflate),
    shorts(TAG.photometric, 1),
    shorts(TAG.samplesPerPixel, bands),
    shorts(TAG.planarConfiguration, 1),
    shorts(TAG.predictor, 3),
    shorts(TAG.tileWidth, tile),
    shorts(TAG.tileLength, tile),
    shorts(TAG.sampleFormat, ...each(3)),
    ascii(TAG.gdalNodata, Buffer.from(nodataText, "latin1")),
  ];
  // Bands beyond the first are "unspecified" extra samples.
  if (bands > 1) tags.push(shorts(TAG.extraSamples, ...each(0).slice(1)));
  return tags;
}
