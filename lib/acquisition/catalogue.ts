/** Every kind of source of a survey; which one a file is, its first bytes or its name say. */
import {InputError} from "../errors.ts";
import type {ByteSource} from "../formats/byte-source.ts";
import type {Survey} from "../survey/survey.ts";
import {openAsegSurvey} from "./aseg-gdf2.ts";
import {openDelimitedSurvey} from "./delimited.ts";
import {isGdf2} from "./gdf2-pairs.ts";
import {openRasterSurvey} from "./raster-rows.ts";
import type {AcquisitionSettings} from "./settings.ts";

interface SourceKind {
  readonly name: string;
  /**
   * @param head the first bytes of the file, up to 16
   * @param names of all files of the survey
   */
  recognises(head: Uint8Array, name: string, names: readonly string[]): boolean;
  /** How many files make one survey. */
  readonly most: number;
  open(files: readonly ByteSource[], settings: AcquisitionSettings): Promise<Survey>;
}

/** "II" or "MM", then 42 (TIFF) or 43 (BigTIFF) in that byte order. */
const isTiff = ([a, b, c, d]: Uint8Array): boolean =>
  (a === 0x49 && b === 0x49 && (c === 42 || c === 43) && d === 0) ||
  (a === 0x4d && b === 0x4d && c === 0 && (d === 42 || d === 43));

const GRID: SourceKind = {
  name: "GeoTIFF grid",
  recognises: isTiff,
  most: 1,
  open: ([file], settings) => openRasterSurvey(file!, settings),
};

/** In the order tried; the last takes what no other does. */
const SOURCE_KINDS: readonly SourceKind[] = [
  GRID,
  {
    name: "ASEG-GDF2 pair",
    recognises: (_head, name, names) => isGdf2(name, names),
    most: Infinity,
    open: openAsegSurvey,
  },
  {name: "table", recognises: () => true, most: Infinity, open: openDelimitedSurvey},
];

/**
 * @param files in the order of the survey
 * @throws {InputError} `survey/no-file`, `survey/mixed-kinds`, `survey/several-grids`, and those of the source
 */
export async function openSurvey(files: readonly ByteSource[], settings: AcquisitionSettings): Promise<Survey> {
  if (files.length === 0) throw new InputError("survey/no-file", "No survey file was given. Name one or more.");
  const names = files.map(({name}) => name);
  const kinds: SourceKind[] = [];
  for (const file of files) {
    const head = await file.read(0, Math.min(16, file.size));
    kinds.push(SOURCE_KINDS.find((kind) => kind.recognises(head, file.name, names))!);
  }
  const kind = kinds[0]!;
  const other = kinds.findIndex((candidate) => candidate !== kind);
  if (other >= 0)
    throw new InputError(
      "survey/mixed-kinds",
      `${files[0]!.name} is a ${kind.name}, ${files[other]!.name} a ${kinds[other]!.name}; one kind makes a survey. Run them one by one.`,
      {place: {file: files[other]!.name}},
    );
  if (files.length > kind.most)
    throw new InputError(
      "survey/several-grids",
      `${files.length} files of the kind ${kind.name} were given; ${kind.most} makes a survey. Run them one by one.`,
      {place: {file: files[1]!.name}},
    );
  if (kind !== GRID) refuseGridSettings(settings, files[0]!.name);
  return kind.open(files, settings);
}

function refuseGridSettings({profiles, every, sampling}: AcquisitionSettings, file: string): void {
  const option =
    typeof profiles !== "string"
      ? `--profiles ${profiles.file}`
      : every !== undefined
        ? `--every ${every}`
        : sampling !== undefined
          ? `--sampling ${sampling}`
          : undefined;
  if (option === undefined) return;
  throw new InputError(
    "survey/not-a-grid",
    `${option} takes lines out of a grid, but ${file} is a table and has lines of its own. Leave it out, or give a GeoTIFF.`,
    {place: {file}},
  );
}
