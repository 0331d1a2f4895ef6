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
        "  groundward plan --observable field-vertical --clearance 10 --clearance 20 --spacing 4 --noise 0.5 \\",
        "      --bound rms:100 --strip-width 30 --length 320 --strip-strength 0.5",
      ].join("\n"),
    );
  return command.action(async () => {
    const {planRun} = await import("../plan-run.ts");
    finish(await planRun(askedOf(command), host));
  });
};
