/** A file on disk as a source of bytes, for tests. */
import {closeSync, openSync, readSync, statSync} from "node:fs";
import {basename} from "node:path";
import type {ByteSource} from "../../lib/formats/byte-source.ts";

/** Opens and closes the file at every read, so that nothing has to be closed at the end. */
export function fileSource(path: string): ByteSource {
  return {
    name: basename(path),
    size: statSync(path).size,
    read: (offset, length) => {
      const file = openSync(path, "r");
      try {
        const bytes = new Uint8Array(length);
        return Promise.resolve(bytes.subarray(0, readSync(file, bytes, 0, length, offset)));
      } finally {
        closeSync(file);
      }
    },
  };
}
