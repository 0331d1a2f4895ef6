/** What every reader of a result must know, said once: README, report, record and the last lines of a run take it from here. */

export interface Caution {
  readonly code: "no-clearance" | "boundary" | "row-by-row" | "practice";
  /** The few words that lead. */
  readonly lead: string;
  readonly text: string;
}

const NO_CLEARANCE: Caution = {
  code: "no-clearance",
  lead: "Not a clearance.",
  text: "A computed source is not clearance to dig, drill or enter. Where nothing shows, something may still lie: too small, too deep, too weak, or without the property that was measured.",
};

const BOUNDARY: Caution = {
  code: "boundary",
  lead: "Nothing above the boundary.",
  text: "Every figure rests on all sources lying at or below the boundary and inside the support. A source above the boundary (a fence, a pipe in a bank, a car beside the line) makes the result invalid, and the result cannot always tell.",
};

export const ROW_BY_ROW: Caution = {
  code: "row-by-row",
  lead: "Row by row, two-dimensional.",
  text: "Each row or column of a grid is worked as a line of its own, over bodies that run on across it. That is not a three-dimensional continuation: short bodies and bodies oblique to the rows come out too weak or too wide, and the intervals do not cover that.",
};

const PRACTICE: Caution = {
  code: "practice",
  lead: "Local codes and licensed practice decide.",
  text: "What must be probed, marked, cleared or signed is set by the codes and the licensed professionals of the place. This result is one piece of evidence for them and replaces neither.",
};

/** The cautions of a run over survey lines or over a grid, the gravest first. */
export const cautionsFor = (kind: "lines" | "grid"): readonly Caution[] =>
  kind === "grid" ? [NO_CLEARANCE, ROW_BY_ROW, BOUNDARY, PRACTICE] : [NO_CLEARANCE, BOUNDARY, PRACTICE];

/** Every caution, for documents that speak of both. */
export const CAUTIONS: readonly Caution[] = cautionsFor("grid");

export const cautionSentence = (caution: Caution): string => `${caution.lead} ${caution.text}`;
