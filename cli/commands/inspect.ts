/** `groundward inspect`: what is in the files and what is doubtful, before anything is computed from them. */
import {askedOf, declare} from "../options/declare.ts";
import {MEASURED} from "../options/measured.ts";
import {PRINTED} from "../options/output.ts";
import type {AddCommand} from "./command.ts";

export const inspectCommand: AddCommand = (create, host, finish) => {
  const command = declare(create("inspect"), [MEASURED, PRINTED])
    .summary("what is in the files and what is doubtful")
    .description(
      "Reads a survey and tells, per line, what is there and what is doubtful: stations, direction, spacing, heights, offsets, gaps, repeats, noise, agreement with neighbouring lines; and which corrections Groundward does not make.",
    )
    .argument("<survey...>", "CSV files with a header row, or one GeoTIFF")
    .addHelpText("after", "\nExample:\n  groundward inspect lines.csv --observable gravity");
  return command.action(async (paths: string[]) => {
    const asked = askedOf(command);
    const {inspectRun} = await import("../inspect-run.ts");
    finish(await inspectRun(paths, asked, host));
  });
};
