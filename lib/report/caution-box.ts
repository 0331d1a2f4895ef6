/** The cautions on a page: the gravest in full near the top, all of them below the answer and again at the end. */
import {type Caution, cautionsFor} from "./cautions.ts";

const paragraph = ({lead, text}: Caution): string => `<p><b>${lead}</b> ${text}</p>`;

export const cautionBox = (kind: "lines" | "grid"): string =>
  `<div class="warn">${cautionsFor(kind).map(paragraph).join("")}</div>`;

/** The first caution, and for a grid also that it is worked row by row. */
export const cautionLead = (kind: "lines" | "grid"): string =>
  `<div class="bar">${cautionsFor(kind)
    .slice(0, kind === "grid" ? 2 : 1)
    .map(paragraph)
    .join("")}</div>`;
