/** Four line masses, and their field: the model of more than one test, and of a benchmark. */

/** [x, depth below the line, strength]: g = Σ l (z − y)/((x − x_i)² + (z − y)²), y downward from the line. */
export const MASSES = [
  [-60, 36, 36],
  [0, 30, 30],
  [14, 30, 24],
  [70, 45, 54],
] as const;

/** @param down y, from the line that the depths are counted from */
export const massesAt = (x: number, down: number): number =>
  MASSES.reduce((sum, [at, z, l]) => sum + (l * (z - down)) / ((x - at) ** 2 + (z - down) ** 2), 0);
