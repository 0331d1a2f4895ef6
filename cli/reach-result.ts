/** The closing sentences of a run: the finest feature and the depth to trust, of the one line or over all of them. */
import {resolutionSentence, trustSentence} from "../lib/report/reach-words.ts";
import type {LineStudy} from "../lib/study/outcome.ts";
import {paragraph} from "./paragraph.ts";
import {printable} from "./printable.ts";
import {figure} from "./table.ts";

interface Extreme {
  readonly id: string;
  readonly value: number;
}

export interface ReachResult {
  add(id: string, study: LineStudy): void;
  text(): string;
}

export function reachResult(): ReachResult {
  let only: LineStudy | undefined;
  let count = 0;
  let finest: Extreme | undefined;
  let coarsest: Extreme | undefined;
  let deepest: Extreme | undefined;
  let shallowest: Extreme | undefined;
  let untrusted = 0;
  return {
    add: (id, study) => {
      only = study;
      ++count;
      const own = {id, value: study.resolution.length};
      if (!(finest !== undefined && finest.value <= own.value)) finest = own;
      if (!(coarsest !== undefined && coarsest.value >= own.value)) coarsest = own;
      const level = study.trust?.level;
      if (level === undefined) return;
      if (Number.isNaN(level)) {
        ++untrusted;
        return;
      }
      if (!(deepest !== undefined && deepest.value <= level)) deepest = {id, value: level};
      if (!(shallowest !== undefined && shallowest.value >= level)) shallowest = {id, value: level};
    },
    text: () => {
      if (only === undefined || finest === undefined || coarsest === undefined) return "";
      if (count === 1) return `\n${told(resolutionSentence(only))}${told(trustSentence(only.trust))}`;
      const resolved = `Features narrower than ${metres(finest)} to ${metres(coarsest)} are not in the data; each line's own is in lines.csv.`;
      const trusted =
        deepest === undefined || shallowest === undefined
          ? ""
          : `Depth to trust: ${metres(deepest)} to ${metres(shallowest)} above the boundary. `;
      const none =
        untrusted > 0 ? `Depth to trust: none on ${untrusted} of ${count} lines, not even at the lowest sensor.` : "";
      const trust = `${trusted}${none}`;
      return `\n${told(resolved)}${trust === "" ? "" : told(trust)}`;
    },
  };
}

const told = (text: string): string => paragraph("", text, 100, "");
const metres = ({id, value}: Extreme): string =>
  `${Number.isFinite(value) ? `${figure(value, 3)} m` : "any length"} (line ${printable(id, 40)})`;
