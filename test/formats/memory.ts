/** Sources, sinks and scratch space in memory, for tests. */
import type {ByteSink, ByteSource, ScratchStore} from "../../lib/formats/byte-source.ts";

export function memorySource(content: string | Uint8Array, name = "lines.csv"): ByteSource {
  const bytes = typeof content === "string" ? new TextEncoder().encode(content) : content;
  return {
    name,
    size: bytes.length,
    read: (offset, length) => Promise.resolve(bytes.slice(offset, offset + length)),
  };
}

/** Grows by appending; can be read back, and given whole. */
export function memoryStore(): ByteSink & ScratchStore & {readonly bytes: () => Uint8Array} {
  let held = new Uint8Array(1 << 16);
  let size = 0;
  const append = (bytes: Uint8Array): Promise<void> => {
    if (size + bytes.length > held.length) {
      const larger = new Uint8Array(Math.max(2 * held.length, size + bytes.length));
      larger.set(held.subarray(0, size));
      held = larger;
    }
    held.set(bytes, size);
    size += bytes.length;
    return Promise.resolve();
  };
  return {
    append,
    write: append,
    read: (offset, length) => Promise.resolve(held.slice(offset, Math.min(size, offset + length))),
    bytes: () => held.slice(0, size),
  };
}

/** The code and message of the error that `run` must fail with. */
export async function failure(
  run: () => unknown,
): Promise<{code: string; message: string; row?: number | undefined; column?: string | undefined}> {
  try {
    await run();
  } catch (error) {
    const {code, message, place} = error as {code: string; message: string; place?: {row?: number; column?: string}};
    if (code === undefined) throw error;
    return {code, message, row: place?.row, column: place?.column};
  }
  throw new Error("nothing was thrown");
}
