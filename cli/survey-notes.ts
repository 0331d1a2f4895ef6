/** What was understood of the files, told before the work starts. */
import {counted} from "../lib/report/number-text.ts";
import type {Survey} from "../lib/survey/survey.ts";
import {figure} from "./table.ts";

/** One sentence per choice: columns, axis and zero of chainage, delivered coordinates. */
export function surveyNotes({choices, axes, delivered, grid, lineCount, kind}: Survey): string[] {
  const notes: string[] = [];
  // What was recognised is what may be wrong: said once, behind those columns.
  const columns = (found: boolean): string =>
    choices
      .filter(({reason}) => (reason !== "asked") === found)
      .map(({role, column}) => `${role} from "${column}"`)
      .join(", ");
  const parts = [columns(false), columns(true) === "" ? "" : `${columns(true)} (recognised)`].filter(
    (part) => part !== "",
  );
  if (parts.length > 0)
    notes.push(`${kind === "lines" ? `${counted(lineCount, "line")}. ` : ""}Columns: ${parts.join("; ")}.`);
  if (grid !== undefined)
    notes.push(
      `Grid of ${grid.width} × ${grid.height} pixels; its ${grid.orientation} are the lines: a reading every ${figure(grid.step)} m, ${figure(grid.spacing)} m apart.`,
    );
  for (const {group, azimuth, origin, system, lines} of axes) {
    const name = axes.length > 1 ? `Group ${group}, ${counted(lines, "line")}: chainage` : "Chainage";
    if (azimuth === undefined || origin === undefined) notes.push(`${name} as given.`);
    else
      notes.push(
        `${name} grows towards ${azimuth.toFixed(1)}° from grid north, zero at ${origin[0].toFixed(1)}, ${origin[1].toFixed(1)} (${system}).`,
      );
  }
  if (delivered !== undefined) notes.push(`Delivered x, y: ${delivered}.`);
  if (kind === "lines" && parts.length === 0) notes.push(`${counted(lineCount, "line")}.`);
  return notes;
}
