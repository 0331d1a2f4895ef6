/** One tile of float32 pixels as it stands in the file: floating-point predictor, then deflate. */
import {promisify} from "node:util";
import {deflate} from "node:zlib";

const deflated = promisify(deflate);
const LEVEL = 6;

/** How pixels without a value are stored. */
export interface Fill {
  readonly text: string;
  readonly value: number;
}

/**
 * Compresses a tile. Source of the predictor: Adobe Photoshop TIFF Technical Note 3 (2005):
 * in each row, first all most significant bytes, last all least significant ones, then
 * each byte less the one `bands` before it.
 *
 * @param pixels tile × tile × bands; not changed
 */
export function encodeTile(pixels: Float32Array, tile: number, bands: number): Promise<Uint8Array> {
  const samples = tile * bands;
  const rowBytes = 4 * samples;
  const view = new DataView(pixels.buffer, pixels.byteOffset, pixels.byteLength);
  // Host order does not matter: the bits are taken as numbers.
  const littleEndian = new Uint8Array(Float32Array.of(1).buffer)[3] !== 0;
  const out = new Uint8Array(tile * rowBytes);
  for (let row = 0; row < tile; ++row) {
    const start = row * rowBytes;
    for (let i = 0; i < samples; ++i) {
      const bits = view.getUint32(start + 4 * i, littleEndian);
      out[start + i] = bits >>> 24;
      out[start + samples + i] = bits >>> 16;
      out[start + 2 * samples + i] = bits >>> 8;
      out[start + 3 * samples + i] = bits;
    }
    for (let k = start + rowBytes - 1; k >= start + bands; --k) out[k] = out[k]! - out[k - bands]!;
  }
  return deflated(out, {level: LEVEL});
}

/**
 * Cuts a tile out of held rows. Pixels without a value, and those past the edge of the
 * grid, become the fill; a reading that happens to equal it moves to the next float.
 */
export function cutTile(
  rows: Float32Array,
  held: number,
  width: number,
  column0: number,
  tile: number,
  bands: number,
  fill: number,
): Float32Array {
  const pixels = new Float32Array(tile * tile * bands).fill(fill);
  const samples = Math.min(tile, width - column0) * bands;
  const stored = Math.fround(fill);
  const beside = nextFloat(stored);
  for (let row = 0; row < held; ++row) {
    const from = (row * width + column0) * bands;
    const to = row * tile * bands;
    for (let i = 0; i < samples; ++i) {
      const value = rows[from + i]!;
      if (value === stored) pixels[to + i] = beside;
      else if (!Number.isNaN(value)) pixels[to + i] = value;
    }
  }
  return pixels;
}

/** The neighbour nearer to zero; beside zero itself, the smallest positive float. */
function nextFloat(value: number): number {
  const bits = new DataView(new ArrayBuffer(4));
  bits.setFloat32(0, value);
  const pattern = bits.getUint32(0);
  bits.setUint32(0, value === 0 ? 1 : pattern - 1);
  return bits.getFloat32(0);
}
