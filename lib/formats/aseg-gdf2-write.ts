/**
 * Writes an ASEG-GDF2 pair: rows first go to temporary space, and when the last has come, every
 * column gets the narrowest format that holds all of its cells, a blank before it and, where some
 * are missing, a number that means "no value". So the data fits its definition whatever it holds.
 */
import type {ByteSink, ScratchStore} from "./byte-source.ts";
import {csvNumber} from "./csv-text.ts";

export interface WrittenField {
  /** Letters, digits and underscores. */
  readonly name: string;
  readonly kind: "text" | "number";
  readonly unit?: string;
  /** A name in words; commas, colons, semicolons and equals signs become blanks. */
  readonly longName: string;
}

export interface Gdf2Writer {
  /**
   * One cell a field: text, or a number of which twelve significant digits are kept;
   * undefined or not finite: no value.
   */
  row(cells: readonly (string | number | undefined)[]): Promise<void>;
  /** Writes both files; bytes in the order of the rows, the same for the same rows. */
  finish(files: {readonly definition: ByteSink; readonly data: ByteSink}): Promise<void>;
}

/** What is known of a column after all of its cells. */
interface Extent {
  /** Bytes of the longest text. */
  text: number;
  missing: boolean;
  /** Digits before and after the decimal point, with the sign; of cells without an exponent. */
  before: number;
  after: number;
  exponent: boolean;
  least: number;
}

/** Digits after the decimal point that a column of fixed decimals may have; beyond, an exponent is shorter. */
const MOST_DECIMALS = 15;
/** Numbers from here on are written with an exponent. */
const LARGEST_PLAIN = 1e12;
/** Decimals of a mantissa: twelve significant digits in all. */
const MANTISSA = 11;
/** Bytes of rows gathered before they are handed on. */
const BLOCK = 1 << 16;

/** @throws {RangeError} for a field name that cannot stand in a definition, or a row of another length: a defect of the caller */
export function gdf2Writer(fields: readonly WrittenField[], scratch: ScratchStore): Gdf2Writer {
  for (const {name} of fields) if (!/^\w+$/.test(name)) throw new RangeError(`"${name}" is no name of a field`);
  const extents = fields.map((): Extent => ({text: 1, missing: false, before: 1, after: 0, exponent: false, least: 0}));
  const encoder = new TextEncoder();
  let held = "";
  let stored = 0;
  const flush = async (): Promise<void> => {
    const bytes = encoder.encode(held);
    held = "";
    await scratch.append(bytes);
    stored += bytes.length;
  };
  return {
    row: async (cells) => {
      if (cells.length !== fields.length) throw new RangeError(`${cells.length} cells for ${fields.length} fields`);
      const texts = fields.map(({kind}, c) => (kind === "text" ? plainText(cells[c]) : csvNumber(numberOf(cells[c]))));
      texts.forEach((text, c) => {
        take(extents[c]!, text, fields[c]!.kind);
      });
      held += `${texts.join("\t")}\n`;
      if (held.length >= BLOCK) await flush();
    },
    finish: async ({definition, data}) => {
      await flush();
      const formats = fields.map((field, c) => formatFor(field, extents[c]!));
      await definition.write(encoder.encode(definitionText(fields, formats)));
      let rest = "";
      for await (const piece of storedText(scratch, stored)) {
        const lines = (rest + piece).split("\n");
        rest = lines.pop()!;
        const rows = lines.map(
          (line) =>
            `${line
              .split("\t")
              .map((text, c) => formats[c]!.cell(text))
              .join("")}\n`,
        );
        if (rows.length > 0) await data.write(encoder.encode(rows.join("")));
      }
    },
  };
}

const numberOf = (cell: string | number | undefined): number | undefined => {
  if (typeof cell === "string") throw new RangeError(`"${cell.slice(0, 40)}" in a field of numbers`);
  return cell;
};

/** A line break or a tab would end a row or a cell. */
const plainText = (cell: string | number | undefined): string =>
  cell === undefined
    ? ""
    : String(cell)
        .replaceAll(/\p{Cc}+/gu, " ")
        .trim();

const byteLength = (text: string): number => Buffer.byteLength(text, "utf8");

function take(extent: Extent, text: string, kind: WrittenField["kind"]): void {
  if (text === "") extent.missing = true;
  else if (kind === "text") extent.text = Math.max(extent.text, byteLength(text));
  else {
    const value = Number(text);
    extent.least = Math.min(extent.least, value);
    if (text.includes("e") || Math.abs(value) >= LARGEST_PLAIN) extent.exponent = true;
    else {
      const point = text.indexOf(".");
      extent.before = Math.max(extent.before, point < 0 ? text.length : point);
      extent.after = Math.max(extent.after, point < 0 ? 0 : text.length - point - 1);
    }
  }
}

interface Format {
  /** As in the definition. */
  readonly text: string;
  readonly null: string | undefined;
  cell(text: string): string;
}

/** Widths hold a blank before the longest cell, so that a reader may also cut at white space. */
function formatFor({kind}: WrittenField, extent: Extent): Format {
  if (kind === "text") {
    const width = extent.text + 1;
    return {text: `A${width}`, null: undefined, cell: (text) => ` ${text}${" ".repeat(width - 1 - byteLength(text))}`};
  }
  const exponent = extent.exponent || extent.after > MOST_DECIMALS;
  const decimals = exponent ? MANTISSA : extent.after;
  const shown = (text: string): string => {
    if (exponent) return fortranExponent(Number(text).toExponential(MANTISSA));
    if (decimals === 0) return text;
    const [whole, fraction = ""] = text.split(".");
    return `${whole}.${fraction.padEnd(decimals, "0")}`;
  };
  const none = extent.missing ? shown(String(nullBelow(extent.least))) : undefined;
  const longest = exponent ? "-1.E+100".length + MANTISSA : extent.before + (decimals === 0 ? 0 : decimals + 1);
  const width = 1 + Math.max(longest, none?.length ?? 0);
  return {
    text: exponent ? `E${width}.${decimals}` : decimals === 0 ? `I${width}` : `F${width}.${decimals}`,
    null: none,
    cell: (text) => (text === "" ? none! : shown(text)).padStart(width),
  };
}

/** -99999, or with more nines until it is below twice every value of the column; no reading comes near the last resort. */
function nullBelow(least: number): number {
  let none = -99999;
  while (none > -1e15 && !(none < 2 * least)) none = 10 * none - 9;
  return none < 2 * least ? none : -1.7e308;
}

/** "1.5e-7" as "1.5E-07". */
const fortranExponent = (text: string): string =>
  text.replace(/e([+-])(\d+)$/, (_, sign: string, digits: string) => `E${sign}${digits.padStart(2, "0")}`);

function definitionText(fields: readonly WrittenField[], formats: readonly Format[]): string {
  const words = (text: string): string => text.replaceAll(/[,:;=\p{Cc}\s]+/gu, " ").trim();
  const lines = fields.map(({name, unit, longName}, c) => {
    const {text, null: none} = formats[c]!;
    const attributes = [
      ...(unit === undefined ? [] : [`UNIT=${words(unit)}`]),
      ...(none === undefined ? [] : [`NULL=${none}`]),
      `NAME=${words(longName)}`,
    ];
    return `DEFN ${c + 1} ST=RECD,RT=;${name}:${text}:${attributes.join(",")}\n`;
  });
  return `DEFN   ST=RECD,RT=COMM;RT:A4;COMMENTS:A76\n${lines.join("")}DEFN ${fields.length + 1} ST=RECD,RT=;END DEFN\n`;
}

async function* storedText(scratch: ScratchStore, size: number): AsyncGenerator<string> {
  const decoder = new TextDecoder();
  for (let at = 0; at < size; at += BLOCK)
    yield decoder.decode(await scratch.read(at, Math.min(BLOCK, size - at)), {stream: true});
}
