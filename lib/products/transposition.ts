/**
 * Turns a grid that comes column by column into rows, through a scratch store. Columns are
 * gathered in groups and stored row by row inside a group, so that a block of rows is one read
 * a group; memory is bounded by a group and a block, whatever the size of the grid.
 */
import type {ScratchStore} from "../formats/byte-source.ts";

/** Bytes of a group of columns, and of a block of rows that is read back, about. */
const GROUP_BYTES = 2 ** 23;
const BLOCK_BYTES = 2 ** 24;
const FLOAT = 4;

export interface Transposition {
  /** Takes the next column: `height` entries of every band. */
  column(bands: readonly Float64Array[]): Promise<void>;
  /** All rows in blocks: for every band count × width values, row by row. Call once, after the last column. */
  rows(): AsyncIterable<{readonly count: number; readonly bands: readonly Float32Array[]}>;
}

/** @param store empty */
export function transposition(width: number, height: number, bands: number, store: ScratchStore): Transposition {
  const perGroup = Math.max(1, Math.min(width, Math.floor(GROUP_BYTES / (height * bands * FLOAT))));
  const group = new Float32Array(perGroup * height * bands);
  let held = 0;
  let received = 0;

  /** Columns of group g. */
  const columnsOf = (g: number): number => Math.min(perGroup, width - g * perGroup);

  return {
    async column(values) {
      if (received >= width) throw new RangeError(`more than ${width} columns`);
      const columns = columnsOf(Math.floor(received / perGroup));
      for (let band = 0; band < bands; ++band) {
        const from = values[band]!;
        if (from.length !== height) throw new RangeError(`${from.length} of ${height} rows in a column`);
        for (let row = 0; row < height; ++row) group[(row * columns + held) * bands + band] = from[row]!;
      }
      ++received;
      if (++held < columns) return;
      await store.append(new Uint8Array(group.buffer, 0, columns * height * bands * FLOAT).slice());
      held = 0;
    },
    async *rows() {
      if (received !== width) throw new RangeError(`${received} of ${width} columns were given`);
      const perBlock = Math.max(1, Math.min(height, Math.floor(BLOCK_BYTES / (width * bands * FLOAT))));
      for (let row0 = 0; row0 < height; row0 += perBlock) {
        const count = Math.min(perBlock, height - row0);
        const block = Array.from({length: bands}, () => new Float32Array(count * width));
        for (let g = 0, column0 = 0; column0 < width; ++g, column0 += perGroup) {
          const columns = columnsOf(g);
          const rowBytes = columns * bands * FLOAT;
          const start = column0 * height * bands * FLOAT + row0 * rowBytes;
          const bytes = await store.read(start, count * rowBytes);
          if (bytes.length !== count * rowBytes) throw new RangeError("the scratch store gave back less than it took");
          const values = new Float32Array(bytes.slice().buffer);
          for (let row = 0, from = 0; row < count; ++row)
            for (let column = 0; column < columns; ++column)
              for (let band = 0; band < bands; ++band) block[band]![row * width + column0 + column] = values[from++]!;
        }
        yield {count, bands: block};
      }
    },
  };
}
