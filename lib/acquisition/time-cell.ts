/** The text of a cell as seconds; only differences of it are used. */
import {InputError} from "../errors.ts";
import {type CellPlace, type DecimalMark, parseCell} from "../formats/number-cell.ts";

const DATE_TIME = /^(\d{4}-\d{2}-\d{2})[T ](\d{2}:\d{2}(?::\d{2}(?:\.\d+)?)?)\s*(Z|[+-]\d{2}:?\d{2})?$/i;
const CLOCK = /^(\d{1,2}):(\d{2}):(\d{2}(?:\.\d+)?)$/;

/**
 * Seconds from ISO 8601 (without a zone: UTC), from hours:minutes:seconds, or a plain number; NaN for no value.
 * @throws {InputError} `table/text-in-time`
 */
export function requireTime(text: string, decimal: DecimalMark, place: CellPlace): number {
  const plain = text.trim();
  const whole = DATE_TIME.exec(plain);
  if (whole !== null) {
    const zone = whole[3] ?? "Z";
    const milliseconds = Date.parse(`${whole[1]}T${whole[2]}${/^z$/i.test(zone) ? "Z" : zone}`);
    if (Number.isFinite(milliseconds)) return milliseconds / 1000;
  }
  const clock = CLOCK.exec(plain);
  if (clock !== null) return Number(clock[1]) * 3600 + Number(clock[2]) * 60 + Number(clock[3]);
  const value = parseCell(text, decimal);
  if (value !== undefined) return value;
  const shown = plain.length > 40 ? `${plain.slice(0, 40)}…` : plain;
  throw new InputError(
    "table/text-in-time",
    `${place.file}, row ${place.row}, column "${place.column}" holds "${shown}"; a time such as 2024-05-01T09:30:00Z, 09:30:00 or a number of seconds was needed. Correct the cell, or empty it.`,
    {place},
  );
}
