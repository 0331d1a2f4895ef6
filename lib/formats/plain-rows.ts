/**
 * Columns straight from the bytes of plain rows: one walk over the bytes, text made only of cells asked for as text.
 *
 * A number of at most 2⁵³ as a whole, times or over a power of ten up to 10²², is one rounding of two exact doubles,
 * hence the double nearest to what is written, as `Number` gives it; any other cell goes to `parseCell`.
 * Source: W. D. Clinger, How to read floating point numbers accurately, PLDI 1990 (from memory).
 *
 * Plain is what needs no rule of quoting beyond "a quote at both ends": where a row is not, nothing is said of it and
 * the caller reads on by other means.
 */
import type {ColumnBlock} from "./column-block.ts";
import {CELL_LIMIT, type Delimiter} from "./delimited-rows.ts";
import {type DecimalMark, isNullSentinel, parseCell} from "./number-cell.ts";
import type {TextEncoding} from "./text-encoding.ts";

const [TAB, LF, CR, SPACE, QUOTE, PLUS, MINUS, ZERO, NINE] = [9, 10, 13, 32, 34, 43, 45, 48, 57];
/** Whole numbers below are exact as doubles. */
const EXACT = 2 ** 53;
const POWERS = Float64Array.from({length: 23}, (_, k) => Number(`1e${k}`));

/** What the bytes mean. */
export interface PlainForm {
  readonly encoding: TextEncoding["name"];
  readonly delimiter: number;
  readonly decimal: number;
  readonly mark: DecimalMark;
  /** One entry a byte: 0 where it is content, else it may end a cell. */
  readonly ends: Uint8Array;
  /** Cells in a row. */
  readonly width: number;
  /** One entry a column: position among the numbers or the texts asked for, −1: not asked. */
  readonly numberAt: Int32Array;
  readonly textAt: Int32Array;
}

export function plainForm(
  encoding: TextEncoding["name"],
  delimiter: Delimiter,
  mark: DecimalMark,
  width: number,
  {numbers, texts}: {readonly numbers: readonly number[]; readonly texts: readonly number[]},
): PlainForm {
  const ends = new Uint8Array(256);
  for (const byte of [delimiter.charCodeAt(0), LF, CR, QUOTE]) ends[byte!] = 1;
  const places = (asked: readonly number[]): Int32Array =>
    Int32Array.from({length: width}, (_, column) => asked.indexOf(column));
  return {
    encoding,
    delimiter: delimiter.charCodeAt(0),
    decimal: mark.charCodeAt(0),
    mark,
    ends,
    width,
    numberAt: places(numbers),
    textAt: places(texts),
  };
}

/** Receives rows; what `ColumnBlock` shows of it is in the same arrays. */
export interface PlainRows {
  readonly rowNumbers: Float64Array;
  readonly numbers: readonly Float64Array[];
  readonly texts: readonly string[][];
}

/** What was read of the bytes: rows, the number of the line after them, and where they end. */
export interface PlainRead {
  readonly count: number;
  readonly line: number;
  readonly end: number;
  readonly unread: ColumnBlock["unread"];
}

/**
 * @param bytes rows from `from` to `end`, where every row is ended by a line feed
 * @param line number of the first of them as an editor counts
 * @param most rows to be read
 * @returns undefined where a row is not plain, has too many or too few cells, or a cell beyond the limit
 */
export function readPlainRows(
  into: PlainRows,
  bytes: Buffer,
  from: number,
  end: number,
  line: number,
  most: number,
  form: PlainForm,
): PlainRead | undefined {
  const {encoding, delimiter, decimal, mark, ends, width, numberAt, textAt} = form;
  const {rowNumbers, numbers, texts} = into;
  const starts = new Int32Array(numbers.length);
  const stops = new Int32Array(numbers.length);
  // Of each column of texts the cell before, which a name mostly repeats.
  const lastStart = new Int32Array(texts.length);
  const lastStop = new Int32Array(texts.length).fill(-1);
  let unread: ColumnBlock["unread"];
  let count = 0;
  let p = from;
  while (p < end && count < most) {
    if (bytes[p] === LF || (bytes[p] === CR && bytes[p + 1] === LF)) {
      p += bytes[p] === LF ? 1 : 2;
      ++line;
      continue;
    }
    const rowStart = p;
    let column = 0;
    let filled = false;
    let understood = true;
    for (; ; ++column, ++p) {
      if (column === width) break;
      while (bytes[p] === SPACE) ++p;
      const quoted = bytes[p] === QUOTE;
      if (quoted) ++p;
      const start = p;
      let stop = -1;
      const n = numberAt[column]!;
      if (n >= 0) {
        let byte = bytes[p]!;
        let value = NaN;
        let known = ends[byte] === 1 && !quoted;
        if (!known) {
          const negative = byte === MINUS;
          if (negative || byte === PLUS) byte = bytes[++p]!;
          let whole = 0;
          let digits = p;
          while (byte >= ZERO && byte <= NINE) {
            whole = whole * 10 + (byte - ZERO);
            byte = bytes[++p]!;
          }
          digits = p - digits;
          let power = 0;
          if (byte === decimal) {
            const point = p;
            byte = bytes[++p]!;
            while (byte >= ZERO && byte <= NINE) {
              whole = whole * 10 + (byte - ZERO);
              byte = bytes[++p]!;
            }
            power = point + 1 - p;
            digits -= power;
          }
          if ((byte === 0x65 || byte === 0x45) && digits > 0) {
            byte = bytes[++p]!;
            const below = byte === MINUS;
            if (below || byte === PLUS) byte = bytes[++p]!;
            const first = p;
            let exponent = 0;
            while (byte >= ZERO && byte <= NINE && exponent < 1000) {
              exponent = exponent * 10 + (byte - ZERO);
              byte = bytes[++p]!;
            }
            if (p === first) digits = 0;
            power += below ? -exponent : exponent;
          }
          const numberEnd = p;
          while (byte === SPACE) byte = bytes[++p]!;
          if (ends[byte] === 1 && digits > 0 && whole < EXACT && power >= -22 && power <= 22) {
            value = power < 0 ? whole / POWERS[-power]! : whole * POWERS[power]!;
            if (negative) value = -value;
            if (isNullSentinel(value)) value = NaN;
            known = true;
            stop = quoted ? p : numberEnd;
          }
        }
        if (stop < 0) {
          while (ends[bytes[p]!] === 0) ++p;
          stop = p;
        }
        if (!known) {
          const read = parseCell(bytes.toString(encoding, start, stop), mark);
          if (read === undefined) understood = false;
          else value = read;
        }
        starts[n] = start;
        stops[n] = stop;
        numbers[n]![count] = value;
        if (!Number.isNaN(value)) filled = true;
      } else if (quoted) {
        while (bytes[p] !== QUOTE && bytes[p] !== LF && bytes[p] !== CR) ++p;
        stop = p;
      } else {
        while (ends[bytes[p]!] === 0) ++p;
        stop = p;
      }
      if (quoted) {
        // A delimiter within the quotes of a number ends nothing.
        while (bytes[p] !== QUOTE && bytes[p] !== LF && bytes[p] !== CR) ++p;
        if (n >= 0 && stop !== p) return undefined;
        if (bytes[p++] !== QUOTE) return undefined;
        while (bytes[p] === SPACE) ++p;
      }
      const t = textAt[column]!;
      if (t >= 0) {
        if (!quoted) while (stop > start && bytes[stop - 1] === SPACE) --stop;
        const cells = texts[t]!;
        if (count > 0 && sameBytes(bytes, start, stop, lastStart[t]!, lastStop[t]!)) cells[count] = cells[count - 1]!;
        else {
          const text = textOf(bytes, start, stop, encoding, quoted);
          if (text === undefined) return undefined;
          cells[count] = text;
        }
        lastStart[t] = start;
        lastStop[t] = stop;
        if (cells[count] !== "") filled = true;
      }
      if (bytes[p] !== delimiter) break;
    }
    // Here stands what ends the row, or the delimiter before a cell too many.
    const whole = column === width - 1;
    if (!whole || !filled) {
      const content = contentOf(bytes, rowStart, delimiter, whole);
      if (content === undefined || (content && !whole)) return undefined;
      if (!content) {
        lastStop.fill(-1);
        p = bytes.indexOf(LF, rowStart) + 1;
        ++line;
        continue;
      }
    }
    if (bytes[p] === CR) ++p;
    if (bytes[p] !== LF || p - rowStart > CELL_LIMIT) return undefined;
    if (!understood)
      unread ??= {at: count, cells: Array.from(starts, (start, n) => bytes.toString(encoding, start, stops[n]))};
    rowNumbers[count++] = line++;
    ++p;
  }
  return {count, line, end: p, unread};
}

function sameBytes(bytes: Buffer, start: number, stop: number, otherStart: number, otherStop: number): boolean {
  if (stop - start !== otherStop - otherStart) return false;
  for (let i = 0; i < stop - start; ++i) if (bytes[start + i] !== bytes[otherStart + i]) return false;
  return true;
}

/** The cell as text; undefined where white space of other kinds than the blank stands at its beginning. */
function textOf(
  bytes: Buffer,
  start: number,
  stop: number,
  encoding: TextEncoding["name"],
  quoted: boolean,
): string | undefined {
  const text = bytes.toString(encoding, start, stop);
  if (quoted) return text;
  return text.trimStart() === text ? text.trimEnd() : undefined;
}

/**
 * Whether anything but blanks stands in the cells of a row; undefined where other rules would have to tell.
 * @param whole whether the quotes of the row were seen to be plain
 */
function contentOf(bytes: Buffer, start: number, delimiter: number, whole: boolean): boolean | undefined {
  let unsure = false;
  for (let p = start; ; ++p) {
    const byte = bytes[p]!;
    if (byte === LF || (byte === CR && bytes[p + 1] === LF)) return unsure ? undefined : false;
    if (byte === delimiter || byte === SPACE || byte === TAB) continue;
    if (byte === QUOTE) {
      if (!whole) return undefined;
      if (bytes[++p] !== QUOTE) return true;
    } else if (byte > SPACE && byte < 0x7f) return true;
    else unsure = true;
  }
}
