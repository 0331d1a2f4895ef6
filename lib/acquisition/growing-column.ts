/** A column of numbers whose length is not known beforehand. */
export interface GrowingColumn {
  readonly length: number;
  push(value: number): void;
  at(index: number): number;
  /** The first `count` entries as an array of their own; they leave the column. */
  takeFirst(count: number): Float64Array;
}

export function growingColumn(): GrowingColumn {
  let held = new Float64Array(64);
  let length = 0;
  return {
    get length() {
      return length;
    },
    push(value) {
      if (length === held.length) {
        const larger = new Float64Array(2 * length);
        larger.set(held);
        held = larger;
      }
      held[length++] = value;
    },
    at: (index) => held[index]!,
    takeFirst(count) {
      const taken = held.slice(0, count);
      held.copyWithin(0, count, length);
      length -= count;
      return taken;
    },
  };
}
