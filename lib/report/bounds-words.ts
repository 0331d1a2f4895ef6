/** What is said beside the answers at multiples of an assumed bound. */

/** `M/2`, `M`, `2M`, `4M`. */
export const factorText = (factor: number): string =>
  factor === 1 ? "M" : factor < 1 ? `M/${Math.round(1 / factor)}` : `${factor}M`;

export const assumedWords = (): string =>
  "No bound was given. M is the one that was assumed. If sources are at most M/2, M, 2M or 4M, the answer would be:";
