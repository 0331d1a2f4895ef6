import {expect, test} from "vitest";
import {decodeLzw} from "../../lib/formats/lzw.ts";

/** Codes packed as TIFF packs them, all of the given widths. */
function packed(codes: readonly (readonly [code: number, width: number])[]): Uint8Array {
  const bits = codes.map(([code, width]) => code.toString(2).padStart(width, "0")).join("");
  const padded = bits.padEnd(8 * Math.ceil(bits.length / 8), "0");
  return Uint8Array.from(padded.match(/.{8}/g) ?? [], (byte) => Number.parseInt(byte, 2));
}
const nine = (...codes: number[]): Uint8Array => packed(codes.map((code) => [code, 9]));

test("the worked example of TIFF 6.0, section 13", () => {
  // Printed there (quoted from memory): the codes below stand for 7 7 7 8 8 7 7 6 6.
  const decoded = decodeLzw(nine(256, 7, 258, 8, 8, 258, 6, 6, 257), 100);
  expect([...decoded]).toEqual([7, 7, 7, 8, 8, 7, 7, 6, 6]);
});
test("codes grow by one bit one code early", () => {
  // After 253 literals the table ends at 510: the next code has ten bits.
  const literals = Array.from({length: 254}, (_, i) => [i, 9] as const);
  const decoded = decodeLzw(packed([[256, 9], ...literals, [300, 10], [257, 10]]), 1000);
  // Code 300 is the string of literals 42 and 43.
  expect([...decoded.subarray(252)]).toEqual([252, 253, 42, 43]);
});
test("what ends early gives fewer bytes, what runs on stops at the limit", () => {
  expect([...decodeLzw(nine(256, 1, 2).subarray(0, 3), 10)]).toEqual([1]);
  expect([...decodeLzw(nine(256, 1, 258, 259, 260), 4)]).toEqual([1, 1, 1, 1]);
  expect(decodeLzw(new Uint8Array(0), 10)).toHaveLength(0);
});
test.each([[nine(256, 300)], [nine(258)], [nine(256, 1, 259)]])("an undefined code is refused (%#)", (bytes) => {
  expect(() => decodeLzw(bytes, 10)).toThrow(RangeError);
});
