/**
 * Values of the program as bytes, and back. Objects that the reader has too, functions among them, go as references
 * by name: what hangs on a root, an entry of a catalogue. A function that is none of these is a defect, told by its place.
 */
import {deserialize, serialize} from "node:v8";
import {ReportableError} from "../../lib/errors.ts";
import {type PackedError, packedError, unpackedError} from "./packed-error.ts";

/** Objects by name that writer and reader both have. */
export type Roots = Readonly<Record<string, unknown>>;

const KNOWN = "$known";
const ERROR = "$error";

const isObject = (value: unknown): value is object => typeof value === "object" && value !== null;
const isPlain = (value: object): value is Record<string, unknown> => {
  const prototype = Object.getPrototypeOf(value);
  return prototype === Object.prototype || prototype === null;
};

/** Every object and function that hangs on the roots → the way to it. */
function waysTo(roots: Roots): Map<unknown, readonly string[]> {
  const ways = new Map<unknown, readonly string[]>();
  const visit = (value: unknown, way: readonly string[]): void => {
    if ((!isObject(value) && typeof value !== "function") || ways.has(value)) return;
    ways.set(value, way);
    const entries = Array.isArray(value)
      ? value.entries()
      : isObject(value) && isPlain(value)
        ? Object.entries(value)
        : [];
    for (const [key, entry] of entries) visit(entry, [...way, `${key}`]);
  };
  for (const [name, root] of Object.entries(roots)) visit(root, [name]);
  return ways;
}

/** @throws when a function, or an object of a class, is not among what the roots hold */
export function pack(value: unknown, roots: Roots): Uint8Array {
  const ways = waysTo(roots);
  const made = new Map<object, unknown>();
  const copy = (from: unknown, place: string): unknown => {
    const way = ways.get(from);
    if (way !== undefined) return {[KNOWN]: way};
    if (typeof from === "function" || typeof from === "symbol")
      throw new Error(`${place} is a ${typeof from}, which cannot be kept; put it among the roots or leave it out`);
    if (!isObject(from) || ArrayBuffer.isView(from)) return from;
    const before = made.get(from);
    if (before !== undefined) return before;
    if (from instanceof ReportableError) return {[ERROR]: packedError(from)};
    if (Array.isArray(from)) {
      const list: unknown[] = [];
      made.set(from, list);
      for (const [i, entry] of from.entries()) list.push(copy(entry, `${place}[${i}]`));
      return list;
    }
    if (!isPlain(from) || KNOWN in from || ERROR in from)
      throw new Error(`${place} is an object of a kind that cannot be kept`);
    const object: Record<string, unknown> = {};
    made.set(from, object);
    for (const [key, entry] of Object.entries(from)) object[key] = copy(entry, `${place}.${key}`);
    return object;
  };
  return serialize(copy(value, "value"));
}

/** @param roots as they were given to `pack`, rebuilt */
export function unpack(bytes: Uint8Array, roots: Roots): unknown {
  const seen = new Set<object>();
  const restored = (value: unknown): unknown => {
    if (!isObject(value) || ArrayBuffer.isView(value) || seen.has(value)) return value;
    if (KNOWN in value) return follow(roots, value[KNOWN] as readonly string[]);
    if (ERROR in value) return unpackedError(value[ERROR] as PackedError);
    seen.add(value);
    const entries = value as Record<string, unknown>;
    for (const key of Object.keys(entries)) entries[key] = restored(entries[key]);
    return entries;
  };
  return restored(deserialize(bytes));
}

function follow(roots: Roots, way: readonly string[]): unknown {
  let at: unknown = roots;
  for (const key of way) {
    if (!isObject(at) || !(key in at)) throw new Error(`${way.join(".")} is not here`);
    at = (at as Record<string, unknown>)[key];
  }
  return at;
}
