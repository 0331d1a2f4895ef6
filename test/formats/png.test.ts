import {inflateSync} from "node:zlib";
import {expect, test} from "vitest";
import {encodePng} from "../../lib/formats/png.ts";

/** The pixels of a PNG that uses filter "up" throughout. */
function decode(bytes: Uint8Array, width: number, height: number, channels: number): number[] {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  let data = new Uint8Array(0);
  for (let at = 8; at < bytes.length; at += 12 + view.getUint32(at))
    if (Buffer.from(bytes.subarray(at + 4, at + 8)).toString() === "IDAT")
      data = new Uint8Array(bytes.subarray(at + 8, at + 8 + view.getUint32(at)));
  const raw = inflateSync(data);
  const stride = width * channels;
  const pixels: number[] = [];
  for (let row = 0; row < height; ++row) {
    expect(raw[row * (stride + 1)]).toBe(2);
    for (let i = 0; i < stride; ++i)
      pixels.push((raw[row * (stride + 1) + 1 + i]! + (row === 0 ? 0 : pixels[(row - 1) * stride + i]!)) & 255);
  }
  return pixels;
}

test.each([3, 4] as const)("a picture of %d channels", (channels) => {
  const pixels = Uint8Array.from({length: 5 * 7 * channels}, (_, i) => (i * 89) & 255);
  const bytes = encodePng(5, 7, pixels, channels);
  expect(decode(bytes, 5, 7, channels)).toEqual([...pixels]);
  expect(encodePng(5, 7, pixels, channels)).toEqual(bytes);
});
test("a single white pixel ends as every PNG does", () => {
  // The last chunk is the same in all files: W3C PNG, section 11.2.5; its checksum is widely printed.
  const bytes = encodePng(1, 1, Uint8Array.of(255, 255, 255), 3);
  expect(Buffer.from(bytes.subarray(-12)).toString("hex")).toBe("0000000049454e44ae426082");
});
test("a wrong number of bytes is a defect of the caller", () => {
  expect(() => encodePng(2, 2, new Uint8Array(11), 3)).toThrow(RangeError);
});
