/** Errors for people and, with `--json`, for scripts; and what is said while the work goes on. */
import {type Place, ReportableError} from "../lib/errors.ts";
import {linesText} from "./doubts.ts";
import type {FailureGroup} from "./failures.ts";
import type {Host} from "./nouns.ts";
import {paragraph} from "./paragraph.ts";
import {printable} from "./printable.ts";

/** A message from a file of wild content is cut here. */
const LONGEST = 1500;
const WIDEST = 100;

/** `file:row:column`, as far as they are known. */
const placeText = (place: Place): string =>
  printable([place.file, place.row, place.column].filter((part) => part !== undefined).join(":"), 200);

export interface Messages {
  /** Choices and remarks, for people only. */
  note(text: string): void;
  /** A doubt; for people only, since with `--json` it stands in the result. */
  doubt(text: string): void;
  /** @param lines what failed, when it is not the whole run; scripts are told of the first */
  error(error: ReportableError, lines?: Pick<FailureGroup, "count" | "firstLines">): void;
  /** Anything that is thrown and not reportable. */
  defect(error: unknown): void;
}

export function messagesTo(host: Host, form: {readonly json: boolean; readonly quiet: boolean}): Messages {
  const width = Math.max(40, Math.min(host.err.columns, WIDEST));
  const say = (first: string, text: string): void => host.err.write(paragraph(first, printable(text, LONGEST), width));
  const object = (fields: Readonly<Record<string, unknown>>): void => host.err.write(`${JSON.stringify(fields)}\n`);
  return {
    note: (text) => {
      if (!form.json && !form.quiet) say("", text);
    },
    doubt: (text) => {
      if (!form.json && !form.quiet) say("doubt: ", text);
    },
    error: ({code, message, place}, lines) => {
      if (form.json)
        object({
          code,
          message: printable(message, LONGEST),
          file: place?.file,
          row: place?.row,
          column: place?.column,
          line: lines?.firstLines[0],
        });
      else
        say(
          "error: ",
          `${place === undefined ? "" : `${placeText(place)} · `}${lines === undefined ? "" : linesText({...lines, firstLines: lines.firstLines.map((id) => printable(id, 60))})}${message} [${code}]`,
        );
    },
    defect: (error) => {
      const stack = error instanceof Error ? (error.stack ?? error.message) : String(error);
      const message =
        "This is a defect of Groundward, not a fault of your data. Please report it with the lines below.";
      if (form.json) object({code: "program/defect", message, stack});
      else host.err.write(`defect: ${message}\n${stack}\n`);
    },
  };
}

/** Tells whatever ended the run; @returns its exit status */
export function report(messages: Messages, error: unknown): number {
  if (error instanceof ReportableError) {
    messages.error(error);
    return error.exitStatus;
  }
  messages.defect(error);
  return 1;
}
