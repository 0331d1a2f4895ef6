/** Factors in advice. */

/** Three digits, rounded up: who follows the advice must arrive. */
export function enough(value: number): string {
  const unit = 10 ** (Math.floor(Math.log10(value)) - 2);
  return String(Number((Math.ceil(value / unit) * unit).toPrecision(3)));
}
