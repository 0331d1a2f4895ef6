/** Options that say where results go and how much is said. */
import type {OptionEntry, OptionGroup} from "./entry.ts";

const JSON_ENTRY: OptionEntry = {
  name: "json",
  help: "result as JSON on standard output, every error as one JSON object on standard error",
  default: {value: "off", reason: "a table is easier to read for people"},
};
export const QUIET: OptionEntry = {
  name: "quiet",
  help: "errors only on standard error: no progress, choices, doubts and cautions (files and --json hold them)",
  default: {value: "off", reason: "a doubt that nobody sees helps nobody"},
};

/** For commands that print only. */
export const PRINTED: OptionGroup = {heading: "What is printed", entries: [JSON_ENTRY, QUIET]};

/** For commands that write files. */
export const WRITTEN: OptionGroup = {
  heading: "Where it goes",
  entries: [
    {
      name: "out",
      value: "DIR",
      form: {path: true},
      help: "folder that receives the files; made where it is missing",
      required: "no folder is written to unasked",
    },
    {
      name: "replace",
      help: "write over a run made with other settings or inputs",
      default: {value: "off", reason: "no slip of the hand loses a finished run"},
    },
    JSON_ENTRY,
    QUIET,
  ],
};
