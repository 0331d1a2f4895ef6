/** Doubts, remarks and failures of a run, alike ones told once with the lines they concern. */
import type {ErrorCode, ReportableError} from "../errors.ts";
import type {Notice} from "../notice.ts";
import {messageText, nameText} from "./html.ts";
import {counted, countText} from "./number-text.ts";

type Weight = Notice["weight"] | "failure";

interface Group {
  readonly weight: Weight;
  readonly message: string;
  /** The first lines by name; the others are only counted. */
  readonly lines: string[];
  count: number;
}

export interface Doubts {
  notices(notices: readonly Notice[], line?: string): void;
  failure(failure: ReportableError, line: string): void;
  /** Items of a list, failures first, of each weight those of the survey as a whole before those of lines; empty when there is nothing to tell. */
  list(weights: readonly Weight[]): string;
}

const NAMED = 8;

/** @param noun what an outcome belongs to: `line`, `row` */
export function doubtsOf(noun: string): Doubts {
  const groups = new Map<string, Group>();
  const add = (weight: Weight, code: ErrorCode, message: string, line: string | undefined): void => {
    const key = `${weight} ${code} ${line === undefined}`;
    const group = groups.get(key);
    if (group === undefined) {
      groups.set(key, {weight, message, lines: line === undefined ? [] : [line], count: 1});
      return;
    }
    if (line !== undefined && group.lines.length < NAMED && group.lines.at(-1) !== line) group.lines.push(line);
    ++group.count;
  };
  return {
    notices(notices, line) {
      const told = new Set<string>();
      for (const notice of notices) {
        // A line that raises the same doubt twice counts once; the survey's own doubts each stand alone.
        const of = line ?? notice.line;
        if (of !== undefined && told.has(notice.code)) continue;
        told.add(notice.code);
        if (of === undefined)
          groups.set(`survey ${groups.size}`, {weight: notice.weight, message: notice.message, lines: [], count: 1});
        else add(notice.weight, notice.code, notice.message, of);
      }
    },
    failure: (failure, line) => add("failure", failure.code, failure.message, line),
    list(weights) {
      const items: string[] = [];
      const ofSurvey = (group: Group): boolean => group.lines.length === 0;
      const ordered = [...[...groups.values()].filter(ofSurvey), ...[...groups.values()].filter((g) => !ofSurvey(g))];
      for (const weight of weights)
        for (const group of ordered) if (group.weight === weight) items.push(item(group, noun));
      return items.length === 0 ? "" : `<ul class="plain">${items.join("")}</ul>`;
    },
  };
}

const KIND: Readonly<Record<Weight, string>> = {failure: "fail", doubt: "doubt", remark: "remark"};

function item({weight, message, lines, count}: Group, noun: string): string {
  const text = messageText(message);
  const [first] = lines;
  let lead = "";
  if (first !== undefined && count === 1)
    lead = `<b>${nameText(first.startsWith(noun) ? first : `${capital(noun)} ${first}`)}.</b> `;
  else if (first !== undefined) {
    const rest = count - lines.length;
    const names = lines.map(nameText).join(", ") + (rest > 0 ? ` and ${countText(rest)} more` : "");
    lead = `<b>${counted(count, noun)}</b> (${names}). On ${nameText(first)}: `;
  }
  return `<li class="${KIND[weight]}">${lead}${text}</li>`;
}

const capital = (word: string): string => word.charAt(0).toUpperCase() + word.slice(1);
