/** `groundward continue`: from readings to sources, levels and strips with intervals. */
import {CONTINUE_OPTIONS, SURVEY} from "../options/continue-options.ts";
import {askedOf, declare} from "../options/declare.ts";
import {isOn} from "../options/entry.ts";
import type {AddCommand} from "./command.ts";

export const continueCommand: AddCommand = (create, host, finish) => {
  const command = declare(create("continue"), CONTINUE_OPTIONS)
    .description(
      "The main job, for one line, thousands of them or a grid: estimates the sources on the boundary, carries the field to the levels asked, and answers for strips, each with an interval. Files go to --out; a table goes to standard output.",
    )
    .argument("[survey...]", `${SURVEY.help}; or the key survey of a job file`)
    .addHelpText(
      "after",
      [
        "",
        "Examples:",
        "  groundward continue lines.csv --observable gravity --noise 0.02 --bound rms:0.5 \\",
        "      --support 400:900 --strip dyke=600:700 --level 0 --level 10 --out out/",
        "  groundward continue grid.tif --observable field-vertical --clearance 60 --noise 1 \\",
        "      --bound discrepancy --out out-grid/",
        "  groundward continue --job survey.toml --level 20",
        "  groundward continue --job survey.toml --explain",
        "",
        "Exit status:",
        "  0    every line done",
        "  2    input, setting or environment at fault",
        "  3    sound input that breaks a hypothesis of the theory",
        "  4    the promised accuracy was missed",
        "  5    several lines, some failed: lines.csv says which and why",
        "  130  interrupted: finished lines are kept, and the same command goes on from them",
        "  1    a defect of the program",
        "",
        "A computed source is not clearance to dig, drill or enter.",
      ].join("\n"),
    );
  return command.action(async (paths: string[]) => {
    const asked = askedOf(command);
    const {withRequest} = await import("../request.ts");
    const status = await withRequest(host, paths, asked, async (request) => {
      if (isOn(asked, "explain")) return (await import("../explain.ts")).explain(request, host);
      return (await import("../continue-run.ts")).continueRun(request, host);
    });
    finish(status);
  });
};
