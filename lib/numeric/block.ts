/** A block inside a row-major array: entry (i, j) is `data[offset + i·stride + j]`. */
export interface Block {
  readonly data: Float64Array;
  readonly offset: number;
  readonly stride: number;
}

export const block = (data: Float64Array, offset: number, stride: number): Block => ({data, offset, stride});
