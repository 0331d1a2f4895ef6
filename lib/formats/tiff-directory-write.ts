/** One image directory of a little-endian TIFF or BigTIFF file, as bytes. */
import {FIELD, FIELD_SIZE} from "./tiff-tags.ts";

export interface TagToWrite {
  readonly tag: number;
  /** One of `FIELD`. */
  readonly type: number;
  readonly values: readonly number[];
}

export const shorts = (tag: number, ...values: number[]): TagToWrite => ({tag, type: FIELD.short, values});
export const longs = (tag: number, ...values: number[]): TagToWrite => ({tag, type: FIELD.long, values});
export const doubles = (tag: number, values: readonly number[]): TagToWrite => ({tag, type: FIELD.double, values});
/** Text as bytes, with the NUL that ends it. */
export const ascii = (tag: number, bytes: Uint8Array): TagToWrite => ({tag, type: FIELD.ascii, values: [...bytes, 0]});

const even = (bytes: number): number => bytes + (bytes & 1);
const valueBytes = ({type, values}: TagToWrite): number => values.length * FIELD_SIZE[type]!;

interface Sizes {
  readonly count: number;
  readonly entry: number;
  readonly inline: number;
  readonly next: number;
}
const CLASSIC: Sizes = {count: 2, entry: 12, inline: 4, next: 4};
const BIG: Sizes = {count: 8, entry: 20, inline: 8, next: 8};

/** Bytes of a directory and of the values that do not fit into it; always even. */
export function directorySize(tags: readonly TagToWrite[], big: boolean): number {
  const sizes = big ? BIG : CLASSIC;
  const outside = tags.map(valueBytes).filter((bytes) => bytes > sizes.inline);
  return (
    even(sizes.count + tags.length * sizes.entry + sizes.next) + outside.reduce((sum, bytes) => sum + even(bytes), 0)
  );
}

/**
 * The directory followed by the values that do not fit into it.
 *
 * @param offset where it will stand in the file; even
 * @param next where the next directory stands, 0 for none
 */
export function encodeDirectory(tags: readonly TagToWrite[], offset: number, next: number, big: boolean): Uint8Array {
  const sizes = big ? BIG : CLASSIC;
  const view = new DataView(new ArrayBuffer(directorySize(tags, big)));
  const long = (at: number, value: number): void =>
    big ? view.setBigUint64(at, BigInt(value), true) : view.setUint32(at, value, true);
  const sorted = [...tags].sort((a, b) => a.tag - b.tag);
  if (big) long(0, sorted.length);
  else view.setUint16(0, sorted.length, true);
  let at = sizes.count;
  let outside = even(sizes.count + sorted.length * sizes.entry + sizes.next);
  for (const each of sorted) {
    view.setUint16(at, each.tag, true);
    view.setUint16(at + 2, each.type, true);
    long(at + 4, each.values.length);
    const valueAt = at + sizes.entry - sizes.inline;
    const bytes = valueBytes(each);
    if (bytes <= sizes.inline) putValues(view, valueAt, each);
    else {
      long(valueAt, offset + outside);
      putValues(view, outside, each);
      outside += even(bytes);
    }
    at += sizes.entry;
  }
  long(at, next);
  return new Uint8Array(view.buffer);
}

type Writer = (view: DataView, at: number, value: number) => void;
const WRITERS: Readonly<Record<number, Writer>> = {
  [FIELD.ascii]: (view, at, value) => view.setUint8(at, value),
  [FIELD.short]: (view, at, value) => view.setUint16(at, value, true),
  [FIELD.long]: (view, at, value) => view.setUint32(at, value, true),
  [FIELD.double]: (view, at, value) => view.setFloat64(at, value, true),
  [FIELD.long8]: (view, at, value) => view.setBigUint64(at, BigInt(value), true),
};

function putValues(view: DataView, start: number, {type, values}: TagToWrite): void {
  const write = WRITERS[type]!;
  const size = FIELD_SIZE[type]!;
  for (let i = 0; i < values.length; ++i) write(view, start + i * size, values[i]!);
}
