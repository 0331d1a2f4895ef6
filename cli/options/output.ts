/** Options that say where results go and how much is said. */
import type {OptionEntry, OptionGroup} from "./entry.ts";

const JSON_ENTRY: OptionEntry = {
  name: "json",
  help: "result as JSON on standard output, every error as one JSON object on standard error",
};
const QUIET: OptionEntry = {
  name: "quiet",
  help: "errors only on standard error: no progress, choices, doubts and cautions (files and --json hold them)",
};

/** For commands that print only. */
export const PRINTED: OptionGroup = {heading: "What is printed", entries: [JSON_ENTRY, QUIET]};

/** For commands that write files. */
export const WRITTEN: OptionGroup = {
  heading: "Where it goes",
  entries: [
    {name: "out", value: "DIR", help: "folder that receives the files; made where it is missing (required)"},
    {name: "replace", help: "write over a run made with other settings or inputs"},
    JSON_ENTRY,
    QUIET,
  ],
};
