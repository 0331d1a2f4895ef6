/** What the intervals of a page rest on, as paragraphs. */
import type {IntervalBasis} from "../inverse/nouns.ts";
import {messageText} from "./html.ts";
import {INTERVAL_BASIS} from "./interval-basis.ts";

/** @param promise what stands before them, see `jointPromise` */
export const basisParagraphs = (bases: ReadonlySet<IntervalBasis>, promise = ""): string =>
  [...bases]
    .sort()
    .map((basis) => `<p>${promise}<b>${INTERVAL_BASIS[basis].lead}</b> ${messageText(INTERVAL_BASIS[basis].text)}</p>`)
    .join("");
