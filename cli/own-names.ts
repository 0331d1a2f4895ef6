/** Hidden folders that a run makes inside `--out`, and removes again. */

/** Where files are written before they are put in place; also the mark that a run is on. */
export const UNFINISHED = ".unfinished";

/** Finished lines of a run that can go on. */
export const PARTS = ".groundward-run";
