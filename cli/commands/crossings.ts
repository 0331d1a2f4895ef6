/** `groundward crossings`: what lines read where they cross, at the heights flown and at one height. */
import {SURVEY} from "../options/continue-options.ts";
import {CROSSINGS_OPTIONS} from "../options/crossings-options.ts";
import {askedOf, declare} from "../options/declare.ts";
import type {AddCommand} from "./command.ts";

export const crossingsCommand: AddCommand = (create, host, finish) => {
  const command = declare(create("crossings"), CROSSINGS_OPTIONS)
    .description(
      "Finds where the tracks of a survey cross and compares what the two lines read there: as measured, and after both readings were carried to one height by the source that each line's readings are explained with. Prints statistics before and after, and the worst crossings and lines. A levelling aid, not a levelling: no reading is changed.",
    )
    .argument("[survey...]", `${SURVEY.help}; or the key survey of a job file`)
    .addHelpText(
      "after",
      [
        "",
        "Examples:",
        "  groundward crossings lines.csv ties.csv --observable gravity --boundary 0 --out crossings/",
        "  groundward crossings lines.csv --observable total-field-anomaly --as-measured",
        "",
        "Exit status as of groundward continue; 5 where readings of some lines could not be carried.",
      ].join("\n"),
    );
  return command.action(async (paths: string[]) => {
    const asked = askedOf(command);
    const {withRequest} = await import("../request.ts");
    const status = await withRequest(host, paths, asked, async (request) =>
      (await import("../crossings-run.ts")).crossingsRun(request, host),
    );
    finish(status);
  });
};
