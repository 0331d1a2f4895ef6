/** Every option of `continue`. A job file may hold all of them, and the files of the survey. */
import {ASSUMED} from "./assumed.ts";
import {SHARED_OUT} from "./batch.ts";
import type {OptionEntry, OptionGroup} from "./entry.ts";
import {MEASURED} from "./measured.ts";
import {WRITTEN} from "./output.ts";
import {WANTED} from "./wanted.ts";

const JOB_ENTRY: OptionEntry = {
  name: "job",
  value: "FILE.toml",
  commandLineOnly: true,
  help: "file that holds options, keys named as they are, and survey, the files to read. Paths in it start from its folder. An option given here as well wins",
};

const JOB_HEADING = "Where settings come from";

/** For commands that read a job file. */
export const JOB: OptionGroup = {heading: JOB_HEADING, entries: [JOB_ENTRY]};

const JOB_AND_EXPLAIN: OptionGroup = {
  heading: JOB_HEADING,
  entries: [
    JOB_ENTRY,
    {
      name: "explain",
      commandLineOnly: true,
      help: "print every setting in force, where it came from and why its default is what it is; nothing is read but the job file, and nothing is computed",
    },
  ],
};

/** The files of a survey: operands on the command line, a key in a job file. */
export const SURVEY: OptionEntry = {
  name: "survey",
  value: "FILE",
  repeated: true,
  form: {path: true},
  help: "CSV files with a header row, ASEG-GDF2 pairs (.dfn or .dat, the other beside it), or one GeoTIFF",
  required: "there is nothing to read without it",
};

export const CONTINUE_OPTIONS: readonly OptionGroup[] = [
  MEASURED,
  ASSUMED,
  WANTED,
  WRITTEN,
  SHARED_OUT,
  JOB_AND_EXPLAIN,
];

/** What a job file may hold. */
export const JOB_ENTRIES: readonly OptionEntry[] = [
  SURVEY,
  ...CONTINUE_OPTIONS.flatMap(({entries}) => entries).filter(({commandLineOnly}) => !commandLineOnly),
];
