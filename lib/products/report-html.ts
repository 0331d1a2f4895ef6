/**
 * report.html of a run over lines. It keeps a bounded number of finished sections, rows and
 * map lines while lines come in, and writes the page at the end, since the answer stands first.
 */
import type {IntervalBasis} from "../inverse/nouns.ts";
import {basisParagraphs} from "../report/basis-text.ts";
import {cautionBox, cautionLead} from "../report/caution-box.ts";
import {deliveryOf} from "../report/delivery.ts";
import {type Doubts, doubtsOf} from "../report/doubts.ts";
import {type MapLine, mapFigure, mapLine} from "../report/figures/map.ts";
import {escaped, nameText} from "../report/html.ts";
import {jointPromise} from "../report/interval-words.ts";
import {lineSection} from "../report/line-section.ts";
import {type LineRow, lineRow, lineTable} from "../report/line-table.ts";
import {counted, countText, percentText} from "../report/number-text.ts";
import {PAGE_END, pageStart} from "../report/page.ts";
import {type Selection, selection} from "../report/selection.ts";
import {definitionList, settingsPairs} from "../report/settings-text.ts";
import {type StripRow, stripRows, stripTable} from "../report/strip-table.ts";
import type {LineOutcome} from "../study/outcome.ts";
import type {RunAbout} from "./opening.ts";
import type {LineProduct, RunFrame, TextSink} from "./product.ts";

/** Lines shown in full; table rows; strip rows; lines and segments on the map. Each keeps a page readable and below some 4 MB. */
const MOST = {sections: 40, rows: 400, stripRows: 120, mapLines: 600, segments: 24_000} as const;

/** A line without an answer is graver than any doubt. */
const FAILED_GRAVITY = 1e6;

interface Page {
  readonly frame: RunFrame;
  readonly sections: Selection<{readonly index: number; readonly html: string}>;
  readonly rows: Selection<LineRow>;
  readonly strips: Selection<readonly StripRow[]>;
  readonly map: Selection<MapLine>;
  readonly doubts: Doubts;
  readonly counts: Record<LineOutcome["status"], number>;
  readonly bases: Set<IntervalBasis>;
}

export function reportHtml(sink: TextSink, about: RunAbout): LineProduct {
  let page: Page;
  let index = 0;
  return {
    begin: async (frame) => {
      const total = frame.survey.lineCount;
      const asked = Math.max(1, about.settings.wanted.strips.length);
      page = {
        frame,
        sections: selection(total, MOST.sections),
        rows: selection(total, MOST.rows),
        strips: selection(total, Math.max(8, Math.floor(MOST.stripRows / asked))),
        map: selection(total, MOST.mapLines),
        doubts: doubtsOf("line"),
        counts: {done: 0, doubtful: 0, skipped: 0, failed: 0},
        bases: new Set(),
      };
      page.doubts.notices(frame.survey.notices);
    },
    line: async (outcome) => {
      take(page, outcome, index);
      ++index;
    },
    end: async (across = []) => {
      page.doubts.notices(across);
      for (const piece of pieces(page, about)) await sink.write(piece);
    },
  };
}

function take(page: Page, outcome: LineOutcome, index: number): void {
  ++page.counts[outcome.status];
  if (!("study" in outcome)) {
    page.doubts.failure(outcome.failure, outcome.id);
    page.rows.offer(index, FAILED_GRAVITY, () => lineRow(outcome, index));
    return;
  }
  const {study, status} = outcome;
  const gravity = gravityOf(outcome);
  page.doubts.notices(study.notices, outcome.id);
  page.bases.add(study.choice.basis);
  page.rows.offer(index, gravity, () => lineRow(outcome, index));
  page.sections.offer(index, gravity, () => ({index, html: lineSection(study, status, index)}));
  if (study.strips.length > 0) page.strips.offer(index, gravity, () => stripRows(study));
  const segments = Math.floor(MOST.segments / Math.min(MOST.mapLines, Math.max(1, page.frame.survey.lineCount)));
  page.map.offer(index, gravity, () => mapLine(study, Math.min(150, segments)));
}

/** The number of doubts; among equals, how far the misfit is from what the noise allows. */
function gravityOf(outcome: Extract<LineOutcome, {status: "done" | "doubtful"}>): number {
  const {notices, estimate} = outcome.study;
  const doubts = notices.filter((notice) => notice.weight === "doubt").length;
  if (doubts === 0) return 0;
  const off = Math.abs(Math.log(estimate.misfit / estimate.readings));
  return doubts + (Number.isFinite(off) ? Math.min(0.9, off / 3) : 0.9);
}

function* pieces(page: Page, about: RunAbout): Generator<string> {
  const {frame, counts, doubts} = page;
  const {survey, observable, confidence, intervals} = frame;
  const delivery = deliveryOf(observable);
  const total = counts.done + counts.doubtful + counts.skipped + counts.failed;
  const sections = page.sections.kept();
  const strips = page.strips.kept().flat();
  const rows = page.rows.kept();
  const shown = new Set(sections.map((section) => section.index));

  yield pageStart(`Groundward report: ${survey.files.join(", ")}`);
  yield `<p class="over">Groundward ${escaped(about.version)}: survey lines continued to their sources</p>`;
  yield `<h1>${survey.files.map(nameText).join(", ")}</h1>`;
  yield `<p class="lede">${countsText(counts, total)} Readings: ${escaped(observable.summary)}. Sources: ${escaped(observable.source.density)}, on the boundary.</p>`;
  yield cautionLead("lines");

  yield "<h2>The answer</h2>";
  if (strips.length > 0) {
    yield stripTable(strips, delivery, confidence, true, intervals);
    yield partText(
      strips.length,
      page.strips.offered() * (strips.length / page.strips.kept().length),
      "strip row",
      "strips.csv",
    );
  } else if (counts.done + counts.doubtful === 0) yield "<p>No line could be answered; the reasons follow.</p>";
  else
    yield "<p>No strip was asked about. The table of lines gives the strongest average on each; name a strip with --strip NAME=A:B for a figure in physical units.</p>";
  yield basisParagraphs(page.bases, jointPromise(intervals, percentText(confidence)));

  const grave = doubts.list(["failure", "doubt"]);
  yield `<h2 id="doubts">Doubts</h2>${grave === "" ? "<p>None was raised. That is not proof that there is none.</p>" : grave}`;
  const remarks = doubts.list(["remark"]);
  if (remarks !== "") yield `<h3>Remarks</h3>${remarks}`;
  yield `<h2>Before anyone relies on this</h2>${cautionBox("lines")}`;

  const map = page.map.kept();
  if (map.length > 0) {
    yield `<h2>Where the lines run</h2><figure>${mapFigure(map, delivery.field)}<figcaption>Average source on the boundary below each line; the outermost hundredth of the values at either end shares the end colours.</figcaption></figure>`;
    yield partText(map.length, page.map.offered(), "line", "source.csv");
  }
  yield `<h2>Lines</h2>${lineTable(rows, shown, delivery)}`;
  yield partText(rows.length, total, "line", "lines.csv");
  yield `<h2>Settings</h2>${definitionList(settingsPairs(about.settings, survey))}<p class="small">record.json holds every setting and the digests of all files.</p>`;
  if (sections.length < page.sections.offered())
    yield `<p>${counted(sections.length, "line")} of ${countText(page.sections.offered())} follow in full: those with the gravest doubts and an even sample of the others.</p>`;
  for (const section of sections) yield section.html;
  yield `<h2>Once more</h2>${cautionBox("lines")}`;
  yield PAGE_END;
}

function countsText(counts: Page["counts"], total: number): string {
  const told = (["done", "doubtful", "skipped", "failed"] as const)
    .filter((status) => counts[status] > 0)
    .map((status) => `${countText(counts[status])} ${status}`);
  const pointer = counts.done < total ? ` (<a href="#doubts">see why</a>)` : "";
  return `${counted(total, "line")}: ${told.join(", ")}${pointer}.`;
}

/** Nothing where all are there. */
const partText = (shown: number, of: number, noun: string, file: string): string =>
  shown < of
    ? `<p class="small">${counted(shown, noun)} of ${countText(Math.round(of))} shown: the gravest and an even sample. All are in ${file}.</p>`
    : "";
