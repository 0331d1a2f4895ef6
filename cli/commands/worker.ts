/** `groundward worker`: lines of any run that waits in a queue. */
import {SERVED} from "../options/batch.ts";
import {askedOf, declare} from "../options/declare.ts";
import type {AddCommand} from "./command.ts";

export const workerCommand: AddCommand = (create, host, finish) => {
  const command = declare(create("worker"), [SERVED])
    .description(
      "Takes lines from a queue that groundward continue --queue fills, computes them and keeps them in the folder of their run. Any number may work at once, on any machine that sees that folder and the survey; all must be of the same version of Groundward and of Node. Needs the packages bullmq and ioredis.",
    )
    .addHelpText(
      "after",
      [
        "",
        "Example, on as many machines as there are, and on one of them:",
        "  groundward worker --queue redis://queue.example:6379",
        "  groundward continue --job survey.toml --queue redis://queue.example:6379 --out out/",
        "",
        "Ctrl-C finishes the lines that are being computed; once more ends at once, and others compute them again.",
      ].join("\n"),
    );
  return command.action(async () => {
    const asked = askedOf(command);
    finish(await (await import("../queue/worker-run.ts")).workerRun(host, asked));
  });
};
