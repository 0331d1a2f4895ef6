/** `groundward inspect`: what is in the files and what is doubtful, before anything is computed from them. */
import {JOB, SURVEY} from "../options/continue-options.ts";
import {askedOf, declare} from "../options/declare.ts";
import {MEASURED} from "../options/measured.ts";
import {PRINTED} from "../options/output.ts";
import type {AddCommand} from "./command.ts";

export const inspectCommand: AddCommand = (create, host, finish) => {
  const command = declare(create("inspect"), [MEASURED, PRINTED, JOB])
    .description(
      "Reads a survey and tells, per line, what is there and what is doubtful: stations, direction, spacing, heights, offsets, gaps, repeats, noise, agreement with neighbouring lines; and which corrections Groundward does not make.",
    )
    .argument("[survey...]", `${SURVEY.help}; or the key survey of a job file`)
    .addHelpText("after", "\nExample:\n  groundward inspect lines.csv --observable gravity");
  return command.action(async (paths: string[]) => {
    const asked = askedOf(command);
    const {withRequest} = await import("../request.ts");
    const status = await withRequest(host, paths, asked, async (request) =>
      (await import("../inspect-run.ts")).inspectRun(request, host),
    );
    finish(status);
  });
};
