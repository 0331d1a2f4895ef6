/**
 * The definition file of ASEG-GDF2: which fields a row of the data file holds, and how wide.
 * Source: ASEG-GDF2, the open standard of the Australian Society of Exploration Geophysicists
 * (D. A. Pratt, draft 3.7, 2001; REV4, 2003), and the ways in which its sample files depart from it:
 * ST=RECORD or RECD, the data record called DATA or nothing, attributes apart by "," or ":",
 * formats in either case, numbers from 0, from 1 or absent, several fields in one DEFN.
 */
import {InputError} from "../errors.ts";
import {type FieldFormat, parseFormat} from "./aseg-gdf2-format.ts";

export interface DefinedField {
  readonly name: string;
  readonly format: FieldFormat;
  /** Attributes as written; undefined where absent. */
  readonly unit: string | undefined;
  readonly nullText: string | undefined;
  readonly longName: string | undefined;
  readonly comment: string | undefined;
  /** Row of the definition file. */
  readonly row: number;
}

export interface Definition {
  readonly file: string;
  /** Fields of the data record in order, the record type `RT` apart. */
  readonly fields: readonly DefinedField[];
  /** The field RT when the definition begins the data record with one; the data may be without it. */
  readonly recordType: DefinedField | undefined;
  /** Names of the other records, COMM and PROJ and more, whose rows are no data. */
  readonly otherRecords: readonly string[];
  /** What the PROJ records say, in order: COORDSYS, DATUM, PARAM1 … */
  readonly projection: readonly ProjectionEntry[];
}

export interface ProjectionEntry {
  readonly name: string;
  readonly value: string;
}

/** The sign that ended a text file under DOS. */
export const DOS_END = "\u001a";

/** Not the PROJCS or PROJCRS that begins a definition in WKT. */
const PROJECTION_LINE = /^PROJ(?!CS\b|CRS\b)/i;

const KEYS: Readonly<Record<string, "unit" | "nullText" | "longName" | "comment">> = {
  UNIT: "unit",
  UNITS: "unit",
  NULL: "nullText",
  NAME: "longName",
  COMMENT: "comment",
  COMMENTS: "comment",
};

interface Records {
  /** Fields by record type, upper case. */
  readonly fields: ReadonlyMap<string, readonly DefinedField[]>;
  /** Lines PROJ with the values of a projection. */
  readonly projectionLines: readonly string[];
}

/**
 * @param text the whole file
 * @param projection the file beside it that tells of the coordinate system, if any
 * @throws {InputError} `gdf2/not-a-definition`, `gdf2/format`, `gdf2/no-field`, `gdf2/several-records`, `gdf2/duplicate-field`
 */
export function parseDefinition(
  text: string,
  file: string,
  projection?: {readonly text: string; readonly file: string},
): Definition {
  const own = recordsOf(text, file);
  const beside = projection === undefined ? [] : projectionBeside(projection, own);
  return {...definitionOf(own.fields, file), projection: [...projectionOf(own), ...beside]};
}

function recordsOf(text: string, file: string): Records {
  const records = new Map<string, DefinedField[]>();
  const projectionLines: string[] = [];
  text.split(/\r\n|\n|\r/).forEach((line, i) => {
    const row = i + 1;
    const plain = line.replace(DOS_END, "").trim();
    if (plain === "" || /^COMM\b/i.test(plain)) return;
    // The record type is four characters wide, and what follows may touch it.
    if (PROJECTION_LINE.test(plain)) {
      projectionLines.push(line);
      return;
    }
    const found = /^DEFN\s*\d*\s*(ST\s*=\s*(?:RECD|RECORD)\b.*)$/i.exec(plain);
    if (found === null)
      throw new InputError(
        "gdf2/not-a-definition",
        `${file}, row ${row} begins "${shortened(plain)}"; a line such as "DEFN 1 ST=RECD,RT=;EASTING:F12.2:UNIT=m" was needed. Correct that line, or give the definition file of the data.`,
        {place: {file, row}},
      );
    const [head, ...pieces] = found[1]!.split(";");
    const record = (/RT\s*=\s*([^,;:\s]*)/i.exec(head!)?.[1] ?? "").toUpperCase();
    const fields = records.get(record) ?? [];
    records.set(record, fields);
    for (const piece of pieces) takePiece(piece, fields, {file, row});
  });
  return {fields: records, projectionLines};
}

function takePiece(piece: string, fields: DefinedField[], place: {file: string; row: number}): void {
  const plain = piece.trim();
  if (plain === "" || /^END\s+DEFN\b/i.test(plain)) return;
  const [name, format, ...rest] = plain.split(":").map((part) => part.trim());
  if (name === "" || format === undefined)
    throw new InputError(
      "gdf2/format",
      `${place.file}, row ${place.row} has "${shortened(plain)}" where a field was needed, as NAME:FORMAT (EASTING:F12.2). Complete it; a comment may hold no ";".`,
      {place},
    );
  const parsed = parseFormat(format);
  if (parsed === undefined)
    throw new InputError(
      "gdf2/format",
      `${place.file}, row ${place.row}: field "${shortened(name!)}" has the format "${shortened(format)}"; one of Aw, Iw, Fw.d, Ew.d, Dw.d with an optional repeat count was needed. Correct the format.`,
      {place},
    );
  fields.push({name: name!, format: parsed, row: place.row, ...attributesOf(rest.join(":"))});
}

type Attributes = Pick<DefinedField, "unit" | "nullText" | "longName" | "comment">;

/** Attributes apart by "," or ":"; text without "KEY=" goes on as a comment. */
function attributesOf(text: string): Attributes {
  const found: {-readonly [K in keyof Attributes]: Attributes[K]} = {
    unit: undefined,
    nullText: undefined,
    longName: undefined,
    comment: undefined,
  };
  for (const part of text.split(/[,:]/)) {
    const pair = /^\s*([A-Z]+)\s*=(.*)$/i.exec(part);
    const key = pair === null ? undefined : KEYS[pair[1]!.toUpperCase()];
    const value = (key === undefined ? part : pair![2]!).trim();
    if (value === "") continue;
    const into = key ?? "comment";
    found[into] = found[into] === undefined ? value : `${found[into]}, ${value}`;
  }
  return found;
}

function definitionOf(records: Records["fields"], file: string): Omit<Definition, "projection"> {
  const named = [...records].filter(
    ([name, fields]) => !["", "DATA", "COMM", "PROJ"].includes(name) && fields.length > 0,
  );
  let data = [...(records.get("") ?? []), ...(records.get("DATA") ?? [])].sort((a, b) => a.row - b.row);
  let dataName = "DATA";
  if (data.length === 0 && named.length > 0) {
    if (named.length > 1)
      throw new InputError(
        "gdf2/several-records",
        `${file} defines the records ${named.map(([name]) => shortened(name)).join(", ")} and none called DATA or nothing; one kind of data record is read. Give each kind in a pair of its own.`,
        {place: {file, row: named[1]![1][0]!.row}},
      );
    [dataName, data] = [named[0]![0], [...named[0]![1]]];
  }
  const first = data[0];
  const recordType = first !== undefined && /^RT$/i.test(first.name) && first.format.kind === "A" ? first : undefined;
  // A second RT can only come from the two spellings of the data record in one file.
  const fields = data.filter(({name, format}) => !(/^RT$/i.test(name) && format.kind === "A"));
  if (fields.length === 0)
    throw new InputError(
      "gdf2/no-field",
      `${file} defines no field of a data record; lines such as "DEFN 1 ST=RECD,RT=;EASTING:F12.2:UNIT=m" were needed. Give the definition file of the data, whole.`,
      {place: {file}},
    );
  const seen = new Map<string, DefinedField>();
  for (const field of fields) {
    const earlier = seen.get(field.name);
    if (earlier !== undefined)
      throw new InputError(
        "gdf2/duplicate-field",
        `${file}: rows ${earlier.row} and ${field.row} both define a field "${shortened(field.name)}"; each name may stand once. Rename one of them.`,
        {place: {file, row: field.row, column: field.name}},
      );
    seen.set(field.name, field);
  }
  const others = [...records.keys()].filter((name) => name !== "" && name !== "DATA" && name !== dataName);
  return {
    file,
    fields,
    recordType,
    otherRecords: [...new Set(["COMM", "PROJ", ...others])],
  };
}

/** The values stand in NAME= or COMMENT=, or in a line PROJ of the widths that the fields have. */
function projectionOf({fields, projectionLines}: Records): ProjectionEntry[] {
  const entries: ProjectionEntry[] = [];
  let start = 0;
  for (const {name, format, longName, comment} of fields.get("PROJ") ?? []) {
    const end = start + format.width * format.count;
    const written = projectionLines.map((line) => line.slice(start, end).trim()).find((text) => text !== "");
    start = end;
    const value = written ?? longName ?? comment;
    if (!/^RT$/i.test(name) && value !== undefined) entries.push({name, value});
  }
  return entries;
}

/** A file of its own holds such records too, or lines for those of the definition, or free text. */
function projectionBeside({text, file}: {text: string; file: string}, own: Records): ProjectionEntry[] {
  if (!/^\s*(?:DEFN|COMM)\b/i.test(text) && !PROJECTION_LINE.test(text.trimStart())) {
    const value = text.trim().replaceAll(/\s+/g, " ");
    return value === "" ? [] : [{name: file, value: shortened(value)}];
  }
  const beside = recordsOf(text, file);
  return projectionOf(beside.fields.has("PROJ") ? beside : {...beside, fields: own.fields});
}

/** A message stays a message, whatever stands in the file. */
const shortened = (text: string): string => (text.length > 60 ? `${text.slice(0, 60)}…` : text);
