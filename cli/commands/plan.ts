/** `groundward plan`: what intervals and what resolution a survey can promise, before it is flown. */
import {askedOf, declare} from "../options/declare.ts";
import {PLAN_OPTIONS} from "../options/plan-options.ts";
import type {AddCommand} from "./command.ts";

export const planCommand: AddCommand = (create, host, finish) => {
  const command = declare(create("plan"), PLAN_OPTIONS)
    .description(
      "Prints the half-widths of the intervals and the resolution that a straight, level line would give, for every combination of heights, spacings, noises and bounds. No readings are needed: intervals depend on where stations stand, on the noise and on the bound, not on what is read.",
    )
    .addHelpText(
      "after",
      [
        "",
        "Example:",
        "  groundward plan --observable gravity --clearance 20 --clearance 40 --spacing 2 --noise 0.5 \\",
        "      --bound rms:30 --strip-width 10 --strip-width 20 --strip-strength 200000",
      ].join("\n"),
    );
  return command.action(async () => {
    const {planRun} = await import("../plan-run.ts");
    finish(await planRun(askedOf(command), host));
  });
};
