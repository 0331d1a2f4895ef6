/** Which encoding the bytes of a text file are in, found by looking at all of them once. */
import {isUtf8} from "node:buffer";
import {InputError} from "../errors.ts";
import type {ByteSource} from "./byte-source.ts";

export interface TextEncoding {
  readonly name: "utf8" | "latin1";
  /** Bytes of the byte-order mark, to be skipped. */
  readonly start: number;
}

const CHUNK = 1 << 20;

/**
 * The encoding of a text: UTF-8 (with or without byte-order mark) when every byte
 * fits, else Latin-1, in which any byte does.
 *
 * @throws {InputError} `table/empty-file`, `table/utf16`, `table/not-text`
 */
export async function detectEncoding(source: ByteSource): Promise<TextEncoding> {
  const place = {file: source.name};
  if (source.size === 0)
    throw new InputError(
      "table/empty-file",
      `${source.name} is empty; a header row and rows of data were needed. Check that the file was saved or copied whole.`,
      {place},
    );
  const head = await source.read(0, Math.min(source.size, 4096));
  refuseUtf16(head, source.name);
  const start = head[0] === 0xef && head[1] === 0xbb && head[2] === 0xbf ? 3 : 0;
  if (source.size === start)
    throw new InputError(
      "table/empty-file",
      `${source.name} holds only a byte-order mark; a header row and rows of data were needed.`,
      {place},
    );
  let utf8 = true;
  let carried: Uint8Array = new Uint8Array(0);
  const room = new Uint8Array(Math.min(CHUNK, source.size));
  for (let offset = start; offset < source.size; offset += CHUNK) {
    const chunk = await source.read(offset, Math.min(CHUNK, source.size - offset), room);
    const nul = chunk.indexOf(0);
    if (nul >= 0)
      throw new InputError(
        "table/not-text",
        `${source.name} holds a zero byte at byte ${offset + nul}, so it is not a text table. Give a CSV file with a header row, or a GeoTIFF.`,
        {place},
      );
    if (!utf8) continue;
    const joined = carried.length === 0 ? chunk : Buffer.concat([carried, chunk]);
    const whole = offset + CHUNK >= source.size ? joined.length : wholeCharacters(joined);
    utf8 = isUtf8(joined.subarray(0, whole));
    carried = new Uint8Array(joined.subarray(whole));
  }
  return {name: utf8 ? "utf8" : "latin1", start};
}

/** How many bytes end on a character boundary: at most three are left for the next chunk. */
function wholeCharacters(bytes: Uint8Array): number {
  for (let back = 1; back <= Math.min(3, bytes.length); ++back) {
    const byte = bytes[bytes.length - back]!;
    if (byte < 0x80) return bytes.length;
    if (byte >= 0xc0) {
      const needed = byte >= 0xf0 ? 4 : byte >= 0xe0 ? 3 : 2;
      return back < needed ? bytes.length - back : bytes.length;
    }
  }
  return bytes.length;
}

/** By its mark, or by a zero in every other byte of the first ones. */
function refuseUtf16(head: Uint8Array, name: string): void {
  const marked = (head[0] === 0xff && head[1] === 0xfe) || (head[0] === 0xfe && head[1] === 0xff);
  let even = 0;
  let odd = 0;
  const pairs = Math.min(32, head.length >> 1);
  for (let i = 0; i < pairs; ++i) {
    if (head[2 * i] === 0) ++even;
    if (head[2 * i + 1] === 0) ++odd;
  }
  // Heuristic: Latin letters, digits and separators have one zero byte in each pair.
  const alternates = pairs >= 4 && Math.max(even, odd) >= 0.8 * pairs && Math.min(even, odd) === 0;
  if (marked || alternates)
    throw new InputError(
      "table/utf16",
      `${name} is encoded as UTF-16; UTF-8 was needed. Save it again as "CSV UTF-8", or convert it with: iconv -f UTF-16 -t UTF-8.`,
      {place: {file: name}},
    );
}
