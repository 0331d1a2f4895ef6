/** Pictures as PNG (W3C Portable Network Graphics, third edition), 8 bits a channel, without palette or filter choice by size. */
import {deflateSync} from "node:zlib";

const SIGNATURE = Uint8Array.of(0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a);
const FILTER_UP = 2;

/**
 * The bytes of a PNG file; the same picture gives the same bytes.
 *
 * @param pixels width × height × channels, row by row from the top
 * @param channels 3 for red, green, blue; 4 with opacity
 */
export function encodePng(width: number, height: number, pixels: Uint8Array, channels: 3 | 4): Uint8Array {
  const stride = width * channels;
  if (!(width >= 1 && height >= 1 && pixels.length === stride * height))
    throw new RangeError(`${pixels.length} bytes for ${width} × ${height} × ${channels}`);
  // Each row less the one above it: maps change slowly from row to row.
  const filtered = new Uint8Array((stride + 1) * height);
  for (let row = 0; row < height; ++row) {
    const to = row * (stride + 1);
    const from = row * stride;
    filtered[to] = FILTER_UP;
    for (let i = 0; i < stride; ++i)
      filtered[to + 1 + i] = pixels[from + i]! - (row === 0 ? 0 : pixels[from - stride + i]!);
  }
  const header = new DataView(new ArrayBuffer(13));
  header.setUint32(0, width);
  header.setUint32(4, height);
  header.setUint8(8, 8);
  header.setUint8(9, channels === 3 ? 2 : 6);
  return Buffer.concat([
    SIGNATURE,
    chunk("IHDR", new Uint8Array(header.buffer)),
    chunk("IDAT", deflateSync(filtered)),
    chunk("IEND", new Uint8Array(0)),
  ]);
}

function chunk(type: string, data: Uint8Array): Uint8Array {
  const bytes = new Uint8Array(12 + data.length);
  const view = new DataView(bytes.buffer);
  view.setUint32(0, data.length);
  bytes.set(Buffer.from(type, "latin1"), 4);
  bytes.set(data, 8);
  view.setUint32(8 + data.length, crc32(bytes.subarray(4, 8 + data.length)));
  return bytes;
}

const CRC_TABLE = Uint32Array.from({length: 256}, (_, byte) => {
  let remainder = byte;
  for (let bit = 0; bit < 8; ++bit) remainder = remainder & 1 ? 0xedb88320 ^ (remainder >>> 1) : remainder >>> 1;
  return remainder;
});

/** The checksum of ISO 3309 (annex D of the PNG standard); Node 20 has none of its own. */
function crc32(bytes: Uint8Array): number {
  let remainder = 0xffffffff;
  for (const byte of bytes) remainder = CRC_TABLE[(remainder ^ byte) & 0xff]! ^ (remainder >>> 8);
  return (remainder ^ 0xffffffff) >>> 0;
}
