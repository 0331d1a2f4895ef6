/** One run of the main job, as the parts of the command see it. */
import {observableNamed} from "../lib/potential/catalogue.ts";
import type {LineOutcome} from "../lib/study/outcome.ts";
import type {Settings} from "../lib/study/settings.ts";
import type {Survey} from "../lib/survey/survey.ts";
import type {Messages} from "./messages.ts";
import type {Host} from "./nouns.ts";
import type {RunFolder} from "./run-folder.ts";

export interface Run {
  readonly host: Host;
  readonly settings: Settings;
  readonly survey: Survey;
  readonly folder: RunFolder;
  readonly messages: Messages;
  readonly form: {readonly json: boolean; readonly quiet: boolean};
}

/** Lines, or rows of a grid, by what became of them. */
export type Counts = Record<LineOutcome["status"], number>;

export const noOutcome = (): Counts => ({done: 0, doubtful: 0, skipped: 0, failed: 0});

/** What the values of the run are. */
export const observableOf = (settings: Settings) => observableNamed(settings.acquisition.channels[0]!.observable);
