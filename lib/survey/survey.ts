/** A survey as a stream of lines that can be walked more than once. */
import type {ReportableError} from "../errors.ts";
import type {Notice} from "../notice.ts";
import type {SurveyLine} from "./line.ts";

/** The axis that chainage is counted on: one for each group of lines within 20° of each other. */
export interface Axis {
  readonly group: string;
  /** Grid azimuth of increasing chainage, degrees clockwise from grid north, in [0, 180); undefined when chainage was given. */
  readonly azimuth: number | undefined;
  /** Where chainage is zero and the offset is zero, in the metric system of the work; undefined when chainage was given. */
  readonly origin: readonly [number, number] | undefined;
  /** Name of the metric system, for the record. */
  readonly system: string;
  readonly lines: number;
}

/** Which column of the file was taken for a role, and why. */
export interface RoleChoice {
  readonly role: string;
  readonly column: string;
  readonly reason: "asked" | "recognised";
  /** Unit of readings where the file itself defines it, as `--unit` spells it. */
  readonly unit?: string;
}

/** Frame of a grid whose rows or columns are the lines. */
export interface GridFrame {
  readonly width: number;
  readonly height: number;
  readonly orientation: "rows" | "columns";
  /** Distance between pixels along a line, m, and between lines, m. */
  readonly step: number;
  readonly spacing: number;
}

/** A line, or the reason why it could not be read. */
export type LineRecord = {readonly line: SurveyLine} | {readonly id: string; readonly failure: ReportableError};

export interface Survey {
  readonly kind: "lines" | "grid";
  readonly files: readonly string[];
  readonly axes: readonly Axis[];
  readonly choices: readonly RoleChoice[];
  /** Name of the system of the delivered coordinates. */
  readonly delivered: string | undefined;
  readonly notices: readonly Notice[];
  readonly lineCount: number;
  readonly grid: GridFrame | undefined;
  /** Lines taken from a grid: smooth, so that their record shows no noise, and not flown beside each other. */
  readonly fromGrid?: true;
  /** Walks the lines in the order of the files; may be called again. */
  lines(): AsyncIterable<LineRecord>;
}
