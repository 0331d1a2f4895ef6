/** The polynomial through a few points, by Neville's scheme (from memory). */
export function polynomialThrough(x: readonly number[], y: readonly number[]): (t: number) => number {
  return (t) => {
    const column = [...y];
    for (let order = 1; order < x.length; ++order)
      for (let i = 0; i + order < x.length; ++i)
        column[i] = ((t - x[i + order]!) * column[i]! + (x[i]! - t) * column[i + 1]!) / (x[i]! - x[i + order]!);
    return column[0]!;
  };
}
