/**
 * LZW as TIFF files use it: codes of 9 to 12 bits, the most significant bit first, one
 * bit wider one code early. Source: TIFF 6.0, section 13. geotiff's decoder does the same,
 * but it prints to the console when the bytes end early.
 */

const CLEAR = 256;
const END = 257;
const FIRST = 258;
const TABLE = 4096;

/**
 * The decoded bytes, at most `limit` of them; fewer when the input ends early.
 * @throws {RangeError} on a code that the bytes before it do not define
 */
export function decodeLzw(input: Uint8Array, limit: number): Uint8Array<ArrayBuffer> {
  const output = new Uint8Array(limit);
  const prefix = new Uint16Array(TABLE);
  const last = new Uint8Array(TABLE);
  const lengths = new Uint16Array(TABLE).fill(1, 0, CLEAR);
  for (let code = 0; code < CLEAR; ++code) last[code] = code;
  let next = FIRST;
  let width = 9;
  let previous = -1;
  let at = 0;
  let held = 0;
  let bits = 0;
  for (let read = 0; at < limit; ) {
    while (bits < width && read < input.length) {
      held = ((held << 8) | input[read++]!) & 0xffffff;
      bits += 8;
    }
    if (bits < width) break;
    bits -= width;
    const code = (held >>> bits) & ((1 << width) - 1);
    if (code === END) break;
    if (code === CLEAR) {
      next = FIRST;
      width = 9;
      previous = -1;
      continue;
    }
    const isNew = code === next && previous >= 0;
    if (!(code < CLEAR || (code >= FIRST && code < next && previous >= 0) || isNew))
      throw new RangeError(`code ${code} of ${next}`);
    // The one code that may be used before it is defined: the string before it and that string's first byte.
    const known = isNew ? previous : code;
    const length = lengths[known]!;
    for (let byte = known, i = at + length - 1; i >= at; --i) {
      if (i < limit) output[i] = last[byte]!;
      byte = prefix[byte]!;
    }
    const first = output[at]!;
    at += length;
    if (isNew && at < limit) output[at] = first;
    if (isNew) ++at;
    if (previous >= 0 && next < TABLE) {
      prefix[next] = previous;
      last[next] = first;
      lengths[next] = lengths[previous]! + 1;
      ++next;
      if (next === (1 << width) - 1 && width < 12) ++width;
    }
    previous = code;
  }
  return output.subarray(0, Math.min(at, limit));
}
