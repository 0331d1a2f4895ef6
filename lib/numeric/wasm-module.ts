/**
 * WebAssembly written down by hand: one function and one memory, in the binary format of the W3C core specification 2.0
 * (§5; opcodes from memory, held by the validation of every engine and by the tests).
 */

export type Bytes = readonly number[];

export const I32 = 0x7f;
export const V128 = 0x7b;

/** Unsigned LEB128. */
function unsigned(value: number): Bytes {
  const bytes: number[] = [];
  let rest = value;
  do {
    bytes.push((rest & 0x7f) | (rest > 0x7f ? 0x80 : 0));
    rest >>>= 7;
  } while (rest > 0);
  return bytes;
}

/** Signed LEB128 of a number from 0 on. */
const signed = (value: number): Bytes => {
  const bytes = [...unsigned(value)];
  const last = bytes.length - 1;
  if ((bytes[last] & 0x40) === 0) return bytes;
  bytes[last] |= 0x80;
  return [...bytes, 0];
};

const sized = (items: readonly Bytes[]): Bytes => [...unsigned(items.length), ...items.flat()];
const section = (id: number, content: Bytes): Bytes => [id, ...unsigned(content.length), ...content];
const text = (name: string): Bytes => [...unsigned(name.length), ...[...name].map((letter) => letter.charCodeAt(0))];
const simd = (code: number): Bytes => [0xfd, ...unsigned(code)];

/** Instructions of the kernels; each leaves its result on the stack. */
export const get = (local: number): Bytes => [0x20, ...unsigned(local)];
export const set = (local: number, value: Bytes): Bytes => [...value, 0x21, ...unsigned(local)];
export const integer = (value: number): Bytes => [0x41, ...signed(value)];
export const plus = (a: Bytes, b: Bytes): Bytes => [...a, ...b, 0x6a];
export const minus = (a: Bytes, b: Bytes): Bytes => [...a, ...b, 0x6b];
export const shiftedLeft = (a: Bytes, places: number): Bytes => [...a, ...integer(places), 0x74];
/** The body, again as long as `more` is not zero. */
export const repeated = (body: Bytes, more: Bytes): Bytes => [0x03, 0x40, ...body, ...more, 0x0d, 0, 0x0b];
export const pair = (at: Bytes, offset: number): Bytes => [...at, ...simd(0), 3, ...unsigned(offset)];
/** One number in both lanes. */
export const twice = (at: Bytes, offset: number): Bytes => [...at, ...simd(10), 3, ...unsigned(offset)];
export const store = (at: Bytes, offset: number, value: Bytes): Bytes => [
  ...at,
  ...value,
  ...simd(11),
  3,
  ...unsigned(offset),
];
export const zeros: Bytes = [...simd(12), ...new Array<number>(16).fill(0)];
export const added = (a: Bytes, b: Bytes): Bytes => [...a, ...b, ...simd(0xf0)];
export const multiplied = (a: Bytes, b: Bytes): Bytes => [...a, ...b, ...simd(0xf2)];

/**
 * A module with a memory of `pages` times 64 kB, exported as "memory", and one function of `parameters` integers and no result,
 * exported as "run", with further locals of the types given.
 */
export function moduleBytes(pages: number, parameters: number, locals: Bytes, body: Bytes): Uint8Array {
  const code = [...sized(locals.map((type) => [1, type])), ...body, 0x0b];
  return Uint8Array.from([
    ...[0, 0x61, 0x73, 0x6d, 1, 0, 0, 0],
    ...section(1, sized([[0x60, ...sized(new Array<Bytes>(parameters).fill([I32])), 0]])),
    ...section(3, sized([[0]])),
    ...section(5, sized([[1, ...unsigned(pages), ...unsigned(pages)]])),
    ...section(
      7,
      sized([
        [...text("run"), 0, 0],
        [...text("memory"), 2, 0],
      ]),
    ),
    ...section(10, sized([[...unsigned(code.length), ...code]])),
  ]);
}
