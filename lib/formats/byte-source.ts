/** Where bytes come from and go to. The caller does the input and output; `lib/` only asks for it. */

/** A file, or anything else of known size that can be read at any place. */
export interface ByteSource {
  /** As the user knows it; it stands in every message. */
  readonly name: string;
  /** Bytes. */
  readonly size: number;
  /**
   * The bytes [offset, offset + length); fewer only where the source ends.
   * @param into may be used for them, if it is long enough, and saves memory that is asked for and given back
   */
  read(offset: number, length: number, into?: Uint8Array): Promise<Uint8Array>;
}

/** Receives bytes in order. `bytes` may be reused by the caller once the promise is fulfilled. */
export interface ByteSink {
  write(bytes: Uint8Array): Promise<void>;
}

/** Temporary space: what was appended can be read back by its offset from the beginning. */
export interface ScratchStore {
  append(bytes: Uint8Array): Promise<void>;
  read(offset: number, length: number): Promise<Uint8Array>;
}
