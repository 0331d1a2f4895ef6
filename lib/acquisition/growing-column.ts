/** A column of numbers whose length is not known beforehand. */
export interface GrowingColumn {
  readonly length: number;
  push(value: number): void;
  /** Appends `values[from … to)`. */
  append(values: Float64Array, from: number, to: number): void;
  at(index: number): number;
  /** The first `count` entries as an array of their own; they leave the column. */
  takeFirst(count: number): Float64Array;
}

export function growingColumn(): GrowingColumn {
  let held = new Float64Array(64);
  let length = 0;
  const makeRoom = (more: number): void => {
    const larger = new Float64Array(Math.max(2 * held.length, length + more));
    larger.set(held.subarray(0, length));
    held = larger;
  };
  return {
    get length() {
      return length;
    },
    push(value) {
      if (length === held.length) makeRoom(1);
      held[length++] = value;
    },
    append(values, from, to) {
      if (length + to - from > held.length) makeRoom(to - from);
      for (let i = from; i < to; ++i) held[length++] = values[i]!;
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
