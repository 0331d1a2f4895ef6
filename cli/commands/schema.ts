/** `groundward schema`: the JSON Schema of the job file, for editors and checks. */
import {JOB_ENTRIES} from "../options/continue-options.ts";
import {jobSchema} from "../options/job-schema.ts";
import type {AddCommand} from "./command.ts";

export const schemaCommand: AddCommand = (create, host, finish) => {
  const command = create("schema")
    .description(
      "Prints the JSON Schema (draft 2020-12) of the job file that groundward continue --job reads, so that an editor can complete and check it.",
    )
    .addHelpText("after", "\nExample:\n  groundward schema > groundward-job.schema.json");
  return command.action(() => {
    host.out.write(`${JSON.stringify(jobSchema(JOB_ENTRIES), undefined, 2)}\n`);
    finish(0);
  });
};
