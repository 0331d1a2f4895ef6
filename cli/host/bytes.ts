/** Bytes of an open file, at any place. */
import type {FileHandle} from "node:fs/promises";
import {asking} from "../refusals.ts";

/** The bytes [offset, offset + length) of a file of `size` bytes; fewer where it ends. */
export async function readAt(
  handle: FileHandle,
  shown: string,
  size: number,
  offset: number,
  length: number,
  into?: Uint8Array,
) {
  const wanted = Math.max(0, Math.min(length, size - offset));
  const bytes = into !== undefined && into.length >= wanted ? into.subarray(0, wanted) : new Uint8Array(wanted);
  let filled = 0;
  while (filled < bytes.length) {
    const left = bytes.length - filled;
    const {bytesRead} = await asking(shown, () => handle.read(bytes, filled, left, offset + filled));
    if (bytesRead === 0) break;
    filled += bytesRead;
  }
  return bytes.subarray(0, filled);
}

/** Writes every byte from `position` on. */
export async function writeAt(handle: FileHandle, shown: string, bytes: Uint8Array, position: number): Promise<void> {
  let done = 0;
  while (done < bytes.length) {
    const left = bytes.length - done;
    const {bytesWritten} = await asking(shown, () => handle.write(bytes, done, left, position + done));
    done += bytesWritten;
  }
}
