/** The file of a cloud-optimised GeoTIFF: header, directories, then tiles from the smallest image to the largest. */
import type {ByteSink, ScratchStore} from "./byte-source.ts";
import {directorySize, encodeDirectory, type TagToWrite} from "./tiff-directory-write.ts";
import {FIELD, TAG} from "./tiff-tags.ts";

/** A compressed tile in the scratch store. */
export interface StoredTile {
  readonly offset: number;
  readonly bytes: number;
}

export interface ImageToWrite {
  /** All but those that say where the tiles are. */
  readonly tags: readonly TagToWrite[];
  /** Row by row. */
  readonly tiles: readonly StoredTile[];
}

/**
 * What GDAL announces between header and first directory, so that a reader may fetch a
 * tile together with its size: each tile stands between its size and a repetition of its
 * last four bytes. The final blank leaves room for an editor that breaks the order to say so.
 */
const ANNOUNCED =
  "LAYOUT=IFDS_BEFORE_DATA\nBLOCK_ORDER=ROW_MAJOR\nBLOCK_LEADER=SIZE_AS_UINT4\nBLOCK_TRAILER=LAST_4_BYTES_REPEATED\nKNOWN_INCOMPATIBLE_EDITION=NO\n ";
const LEADER = 4;
const TRAILER = 4;

/**
 * Writes the file.
 * @param images the grid, then its overviews by decreasing size
 * @param bigFrom bytes from which on the file is a BigTIFF
 */
export async function writeLayout(
  images: readonly ImageToWrite[],
  scratch: ScratchStore,
  sink: ByteSink,
  bigFrom: number,
): Promise<void> {
  let dataBytes = 0;
  for (const {tiles} of images) for (const {bytes} of tiles) dataBytes += LEADER + bytes + TRAILER;
  const big = headSize(images, false) + dataBytes > bigFrom;
  const places = placesOf(images, headSize(images, big));
  await sink.write(preamble(big));
  let at = preamble(big).length;
  for (let index = 0; index < images.length; ++index) {
    const tags = [...images[index]!.tags, ...tileTags(images[index]!.tiles, places[index]!, big)];
    const next = at + directorySize(tags, big);
    await sink.write(encodeDirectory(tags, at, index + 1 < images.length ? next : 0, big));
    at = next;
  }
  for (const {tiles} of images.toReversed())
    for (const {offset, bytes} of tiles) await sink.write(framed(await scratch.read(offset, bytes)));
}

/** Bytes before the first tile; the number of tiles decides, not where they are. */
const headSize = (images: readonly ImageToWrite[], big: boolean): number =>
  images.reduce(
    (sum, {tags, tiles}) =>
      sum +
      directorySize(
        [
          ...tags,
          ...tileTags(
            tiles,
            tiles.map(() => 0),
            big,
          ),
        ],
        big,
      ),
    preamble(big).length,
  );

/** Where each tile begins, its size in front of it apart. */
function placesOf(images: readonly ImageToWrite[], start: number): number[][] {
  let at = start;
  const places = images.toReversed().map(({tiles}) =>
    tiles.map(({bytes}) => {
      const place = at + LEADER;
      at = place + bytes + TRAILER;
      return place;
    }),
  );
  return places.reverse();
}

const tileTags = (tiles: readonly StoredTile[], places: readonly number[], big: boolean): TagToWrite[] => [
  {tag: TAG.tileOffsets, type: big ? FIELD.long8 : FIELD.long, values: places},
  {tag: TAG.tileByteCounts, type: FIELD.long, values: tiles.map(({bytes}) => bytes)},
];

/** Header and announcement, up to the first directory. */
function preamble(big: boolean): Uint8Array {
  const text = `GDAL_STRUCTURAL_METADATA_SIZE=${String(ANNOUNCED.length).padStart(6, "0")} bytes\n${ANNOUNCED}`;
  const head = big ? 16 : 8;
  const length = head + text.length;
  const bytes = new Uint8Array(length + (length & 1));
  const view = new DataView(bytes.buffer);
  view.setUint16(0, 0x4949);
  view.setUint16(2, big ? 43 : 42, true);
  if (big) {
    view.setUint16(4, 8, true);
    view.setBigUint64(8, BigInt(bytes.length), true);
  } else view.setUint32(4, bytes.length, true);
  bytes.set(Buffer.from(text, "latin1"), head);
  return bytes;
}

function framed(tile: Uint8Array): Uint8Array {
  const bytes = new Uint8Array(LEADER + tile.length + TRAILER);
  new DataView(bytes.buffer).setUint32(0, tile.length, true);
  bytes.set(tile, LEADER);
  bytes.set(tile.subarray(tile.length - TRAILER), LEADER + tile.length);
  return bytes;
}
