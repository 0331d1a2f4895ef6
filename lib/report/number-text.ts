/** Numbers for reading: as many digits as they deserve, a true minus, thin spaces between thousands. */

const MINUS = "\u2212";
const THIN_SPACE = "\u202f";
const SUPERSCRIPTS = "⁰¹²³⁴⁵⁶⁷⁸⁹";

/** With a fixed number of decimals. */
export function fixedText(value: number, decimals: number): string {
  if (!Number.isFinite(value)) return "–";
  const text = Math.abs(value).toFixed(Math.max(0, Math.min(20, decimals)));
  const [whole, fraction] = text.split(".");
  const spaced = whole!.length > 4 ? whole!.replace(/\B(?=(\d{3})+$)/g, THIN_SPACE) : whole!;
  const sign = value < 0 && /[1-9]/.test(text) ? MINUS : "";
  return sign + (fraction === undefined ? spaced : `${spaced}.${fraction}`);
}

/** With so many significant digits; by a power of ten where the figure would be all zeros. */
export function figureText(value: number, digits = 3): string {
  if (!Number.isFinite(value)) return "–";
  if (value === 0) return "0";
  const exponent = exponentOf(value, digits);
  if (exponent < -4 || exponent > 6) {
    const mantissa = fixedText(value / 10 ** exponent, digits - 1);
    return `${mantissa} × 10${exponent < 0 ? "⁻" : ""}${[...String(Math.abs(exponent))].map((d) => SUPERSCRIPTS[Number(d)]).join("")}`;
  }
  return fixedText(value, digits - 1 - exponent);
}

/** The power of ten of a value once it is rounded to so many digits. */
const exponentOf = (value: number, digits: number): number =>
  Number(
    Math.abs(value)
      .toExponential(digits - 1)
      .split("e")[1],
  );

/** How the ticks of an axis are written: as many decimals as their distance needs. */
export function tickFormat(ticks: readonly number[]): (tick: number) => string {
  const step = ticks.length > 1 ? Math.abs(ticks[1]! - ticks[0]!) : Math.abs(ticks[0] ?? 1) || 1;
  const decimals = Math.max(0, -Math.floor(Math.log10(step) + 1e-9));
  const largest = ticks.reduce((most, tick) => Math.max(most, Math.abs(tick)), 0);
  return decimals > 5 || largest >= 1e7 ? (tick) => figureText(tick, 3) : (tick) => fixedText(tick, decimals);
}

/** A number as it was given, all its digits and no more. */
export const exactText = (value: number): string => String(value + 0).replace("-", MINUS);

/** A coverage as `95 %`. */
export const percentText = (share: number): string => `${exactText(Number((100 * share).toPrecision(6)))} %`;

export const countText = (count: number): string => fixedText(count, 0);

/** Metres without digits that nobody measured. */
export function metreText(metres: number): string {
  const text = fixedText(metres, Math.abs(metres) >= 1000 ? 0 : Math.abs(metres) >= 10 ? 1 : 2);
  return text.includes(".") ? text.replace(/\.?0+$/, "") : text;
}

/** Digits beyond two of the half-width that an end near zero may take, so that it is not read as zero. */
const NEAR_ZERO = 3;

/**
 * Decimals for an interval: two digits of the half-width, and more where an end that is not zero would be printed as zero.
 * @returns undefined where its ends are so small or so large that each is better written with a power of ten
 */
function bracketDecimals(lower: number, upper: number): number | undefined {
  const exponent = exponentOf((upper - lower) / 2, 2);
  const largest = Math.max(Math.abs(lower), Math.abs(upper));
  if (exponent < -6 || exponentOf(largest, 3) > 7) return undefined;
  const least = Math.max(0, 1 - exponent);
  for (let more = 0; more <= NEAR_ZERO; ++more)
    if ([lower, upper].every((end) => end === 0 || isShown(end, least + more))) return least + more;
  return least;
}

const isShown = (value: number, decimals: number): boolean => Number(value.toFixed(Math.min(20, decimals))) !== 0;

/** `12.3 (9.1 to 15.5)`, to two digits of the half-width. */
export function bracketText(value: number, lower: number, upper: number): string {
  if (!(upper > lower) || !Number.isFinite(value)) return figureText(value);
  const decimals = bracketDecimals(lower, upper);
  const text = decimals === undefined ? figureText : (number: number): string => fixedText(number, decimals);
  return `${text(value)} (${text(lower)} to ${text(upper)})`;
}

/** Signs of the ends of an interval as `bracketText` prints them: 0 where an end is printed as zero. */
export function bracketSigns(lower: number, upper: number): readonly [lower: number, upper: number] {
  const decimals = upper > lower ? bracketDecimals(lower, upper) : undefined;
  const sign = (end: number): number => (decimals === undefined || isShown(end, decimals) ? Math.sign(end) : 0);
  return [sign(lower), sign(upper)];
}

/** `1 line`, `12 lines`. */
export const counted = (count: number, noun: string, plural = `${noun}s`): string =>
  `${countText(count)} ${count === 1 ? noun : plural}`;
