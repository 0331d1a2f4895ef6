/**
 * A small TOML file as values, and the place where each was written.
 *
 * The parser tells places of errors only. A place of a key is found with the parser itself: the shortest
 * run of whole lines that it accepts is one statement, since a value that goes on in the next line is
 * refused without it. So no second grammar is needed.
 */
import {parse, TomlDate, TomlError} from "smol-toml";
import {InputError, type Place} from "../errors.ts";
import type {ByteSource} from "./byte-source.ts";

/** Dates and times are text, as ISO 8601 writes them. */
export type TomlValue = string | number | boolean | readonly TomlValue[] | TomlTable;
interface TomlTable {
  readonly [key: string]: TomlValue;
}

export interface TomlDocument {
  readonly values: TomlTable;
  /**
   * Row and column where the statement begins that gives a key; `path` leads to it through tables.
   * The file alone for what is not there, and for what stands behind a value of thousands of lines.
   */
  placeOf(path: readonly string[]): Place;
}

/** A file for settings is far smaller; what is larger was named by mistake. */
const LARGEST = 1 << 18;
const DEEPEST = 16;
/** Characters parsed in search of places: a second or two. A value over some thousand lines takes more, and what follows it has no row. */
const PATIENCE = 1e7;

/** @throws {InputError} `toml/too-large`, `toml/not-utf8`, `toml/syntax` with its row and column */
export async function readToml(source: ByteSource): Promise<TomlDocument> {
  const file = source.name;
  if (source.size > LARGEST)
    throw new InputError(
      "toml/too-large",
      `${source.size} bytes are more than the ${LARGEST} that a file of settings may have. Name the TOML file, not the data.`,
      {place: {file}},
    );
  let text: string;
  try {
    text = new TextDecoder("utf-8", {fatal: true}).decode(await source.read(0, source.size));
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    throw new InputError("toml/not-utf8", "This is not text in UTF-8, which TOML needs. Save it again as UTF-8.", {
      place: {file},
      cause: error,
    });
  }
  const values = parsed(text, file);
  let statements: readonly Statement[] | undefined;
  return {
    values,
    placeOf: (path) => {
      statements ??= statementsOf(text);
      const found = statements.find(({table}) => holds(table, path));
      return found === undefined ? {file} : {file, row: found.row, column: `${found.column}`};
    },
  };
}

function parsed(text: string, file: string): TomlTable {
  try {
    return plain(parse(text, {maxDepth: DEEPEST})) as TomlTable;
  } catch (error) {
    if (!(error instanceof TomlError)) throw error;
    // The first line says what is wrong; a picture of the place follows it.
    const rest = text
      .split("\n")
      .slice(error.line - 1)
      .join("\n")
      .slice(error.column - 1);
    const fault =
      rest.trim() === ""
        ? "it ends before a value does; a bracket or a quote is not closed, or nothing stands behind an equals sign"
        : error.message.split("\n")[0]!.replace(/^Invalid TOML document: /, "");
    throw new InputError(
      "toml/syntax",
      `This is not TOML: ${fault}. Correct the line; a key stands once, and a text stands in quotes, as in name = "text".`,
      {place: {file, row: error.line, column: `${error.column}`}, cause: error},
    );
  }
}

type Parsed = ReturnType<typeof parse>[string];

function plain(value: Parsed): TomlValue {
  if (value instanceof TomlDate) return value.toISOString();
  if (Array.isArray(value)) return value.map(plain);
  if (typeof value !== "object") return value;
  return Object.fromEntries(Object.entries(value as Record<string, Parsed>).map(([key, part]) => [key, plain(part)]));
}

interface Statement {
  /** From one. */
  readonly row: number;
  readonly column: number;
  /** What the statement says, within the tables it stands in. */
  readonly table: TomlTable;
}

/** @param text TOML without a fault */
function statementsOf(text: string): Statement[] {
  const lines = text.split("\n");
  const statements: Statement[] = [];
  let header = "";
  let patience = PATIENCE;
  for (let from = 0; from < lines.length; ) {
    let to = from;
    let run: string;
    let own: TomlTable | undefined;
    do {
      to++;
      run = `${lines.slice(from, to).join("\n")}\n`;
      patience -= run.length;
      if (patience < 0) return statements;
      own = parsedOr(run);
    } while (own === undefined && to < lines.length);
    const isHeader = run.trimStart().startsWith("[");
    if (isHeader) header = run;
    if (own !== undefined && Object.keys(own).length > 0)
      statements.push({
        row: from + 1,
        column: lines[from]!.search(/\S/) + 1,
        table: (isHeader ? own : parsedOr(header + run)) ?? own,
      });
    from = to;
  }
  return statements;
}

/** Undefined where `text` is no whole statement. */
function parsedOr(text: string): TomlTable | undefined {
  try {
    return plain(parse(text, {maxDepth: DEEPEST})) as TomlTable;
  } catch (error) {
    if (error instanceof TomlError) return undefined;
    throw error;
  }
}

function holds(table: TomlTable, path: readonly string[]): boolean {
  let at: TomlValue = table;
  for (const key of path) {
    if (typeof at !== "object" || Array.isArray(at) || !Object.hasOwn(at, key)) return false;
    at = (at as TomlTable)[key]!;
  }
  return true;
}
