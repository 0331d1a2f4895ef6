/** How a delimited text is written: its delimiter, seen in the header, and its decimal mark, seen in the first rows. */
import {doubt, type Notice} from "../notice.ts";
import type {Delimiter} from "./delimited-rows.ts";
import type {DecimalMark} from "./number-cell.ts";

/** The comma last: it also stands in numbers and in prose, so that it loses a tie. */
const DELIMITERS: readonly Delimiter[] = ["\t", ";", "|", ","];

/** The delimiter that occurs most often outside quotes in the header; a comma when none does. */
export function delimiterOf(headerLine: string): Delimiter {
  const bare = headerLine.replace(/"(?:[^"]|"")*"/g, "");
  let best: Delimiter = ",";
  let most = 0;
  for (const delimiter of DELIMITERS) {
    const count = bare.split(delimiter).length - 1;
    if (count > most) {
      most = count;
      best = delimiter;
    }
  }
  return best;
}

export interface Decimal {
  readonly mark: DecimalMark;
  readonly notices: readonly Notice[];
}

/**
 * The decimal mark of a table whose delimiter is not a comma, from a sample of rows.
 * Both marks in one file, or commas that could all separate thousands, raise a doubt.
 */
export function decimalOf(sample: readonly (readonly string[])[], delimiter: Delimiter, file: string): Decimal {
  if (delimiter === ",") return {mark: ".", notices: []};
  let commas = 0;
  let points = 0;
  let couldBeThousands = true;
  let example = "";
  for (const cells of sample)
    for (const cell of cells) {
      if (/^[+-]?\d*,\d+(?:[eE][+-]?\d+)?$/.test(cell)) {
        ++commas;
        example ||= cell;
        if (!/^[+-]?[1-9]\d{0,2},\d{3}$/.test(cell)) couldBeThousands = false;
      } else if (/^[+-]?\d*\.\d+(?:[eE][+-]?\d+)?$/.test(cell)) ++points;
    }
  if (commas === 0) return {mark: ".", notices: []};
  const mark = commas > points ? "," : ".";
  const place = {file};
  if (points > 0)
    return {
      mark,
      notices: [
        doubt(
          "table/mixed-decimal",
          `${file} writes numbers both with a decimal comma (${commas} of the first) and with a decimal point (${points}); "${mark}" is taken. Write the whole file with one mark.`,
          place,
        ),
      ],
    };
  if (couldBeThousands)
    return {
      mark,
      notices: [
        doubt(
          "table/comma-or-thousands",
          `${file}: the comma in ${example} is taken as a decimal comma, but all such numbers could also have it between thousands. Write the file without separators of thousands to be sure.`,
          place,
        ),
      ],
    };
  return {mark, notices: []};
}
