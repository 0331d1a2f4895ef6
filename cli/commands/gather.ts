/** `groundward gather`: the files of a run whose lines were computed in shards or by workers. */
import {askedOf, declare} from "../options/declare.ts";
import {WRITTEN} from "../options/output.ts";
import type {AddCommand} from "./command.ts";

export const gatherCommand: AddCommand = (create, host, finish) => {
  const command = declare(create("gather"), [WRITTEN])
    .description(
      "Checks that every line of the run in --out is finished and writes its files, the same bytes as one run on one machine. What was asked is known from the shards or from whoever filled the queue. With --json or --quiet as for continue.",
    )
    .argument("[survey...]", "the files of the survey where they no longer lie where the shards read them")
    .addHelpText(
      "after",
      [
        "",
        "Example, as four jobs and one that waits for them:",
        "  groundward continue --job survey.toml --shard 1/4 --out out/     (and 2/4, 3/4, 4/4)",
        "  groundward gather --out out/",
        "",
        "Exit status as of groundward continue.",
      ].join("\n"),
    );
  return command.action(async (paths: string[]) => {
    const asked = askedOf(command);
    finish(await (await import("../batch/gather-run.ts")).gatherRun(host, paths, asked));
  });
};
