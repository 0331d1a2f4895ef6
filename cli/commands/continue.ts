/** `groundward continue`: from readings to sources, levels and strips with intervals. */
import {ASSUMED} from "../options/assumed.ts";
import {askedOf, declare} from "../options/declare.ts";
import {MEASURED} from "../options/measured.ts";
import {WRITTEN} from "../options/output.ts";
import {WANTED} from "../options/wanted.ts";
import type {AddCommand} from "./command.ts";

export const continueCommand: AddCommand = (create, host, finish) => {
  const command = declare(create("continue"), [MEASURED, ASSUMED, WANTED, WRITTEN])
    .summary("sources on the boundary and fields on levels, with intervals")
    .description(
      "The main job, for one line, thousands of them or a grid: estimates the sources on the boundary, carries the field to the levels asked, and answers for strips, each with an interval. Files go to --out; a table goes to standard output.",
    )
    .argument("<survey...>", "CSV files with a header row, or one GeoTIFF")
    .addHelpText(
      "after",
      [
        "",
        "Examples:",
        "  groundward continue lines.csv --observable gravity --noise 0.02 --bound rms:0.5 \\",
        "      --support 400:900 --strip dyke=600:700 --level 0 --level 10 --out out/",
        "  groundward continue grid.tif --observable field-vertical --clearance 60 --noise 1 \\",
        "      --bound discrepancy --out out-grid/",
        "",
        "Exit status:",
        "  0    every line done",
        "  2    input, setting or environment at fault",
        "  3    sound input that breaks a hypothesis of the theory",
        "  4    the promised accuracy was missed",
        "  5    several lines, some failed: lines.csv says which and why",
        "  130  interrupted",
        "  1    a defect of the program",
        "",
        "A computed source is not clearance to dig, drill or enter.",
      ].join("\n"),
    );
  return command.action(async (paths: string[]) => {
    const asked = askedOf(command);
    const {continueRun} = await import("../continue-run.ts");
    finish(await continueRun(paths, asked, host));
  });
};
