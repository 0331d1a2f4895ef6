/** Lines that are left out for good reason: recorded with it, and no failure of the run. */
import {EMPTY_ROW} from "../acquisition/raster-rows.ts";
import {OFF_GRID} from "../acquisition/transects.ts";
import {InputError, type ReportableError} from "../errors.ts";
import type {SurveyLine} from "../survey/line.ts";

/** A line that meets no polygon of the support. */
export const OFF_SUPPORT = "support/off-line";

const REASONS: ReadonlySet<string> = new Set([EMPTY_ROW, OFF_GRID, OFF_SUPPORT]);

export const statusWithout = ({code}: ReportableError): "skipped" | "failed" =>
  REASONS.has(code) ? "skipped" : "failed";

export const offSupport = (line: SurveyLine): InputError =>
  new InputError(
    OFF_SUPPORT,
    `Line ${line.id} meets no polygon of --support, so there is no source zone under it. It is left out.`,
    {place: {file: line.file}},
  );

/** Every line was left out: nothing was computed, and that is an error of the input. */
export const allSkipped = (first: ReportableError): InputError =>
  new InputError(
    "survey/all-skipped",
    `No line was left to compute. The first: ${first.message}${
      first.code === OFF_SUPPORT
        ? " Check that the polygons lie where the lines do, longitude before latitude, and that --crs is right."
        : ""
    }`,
    {place: first.place},
  );
