/** report.html of a run over a grid: pictures no larger than a screen, the ledger in short, doubts, cautions. */
import type {IntervalBasis} from "../inverse/nouns.ts";
import {basisParagraphs} from "../report/basis-text.ts";
import {cautionBox, cautionLead} from "../report/caution-box.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import {type Doubts, doubtsOf} from "../report/doubts.ts";
import {type GridPicture, gridPicture} from "../report/figures/grid-picture.ts";
import {type GridLedger, gridLedger} from "../report/grid-ledger.ts";
import {escaped, nameText} from "../report/html.ts";
import {levelWords} from "../report/level-words.ts";
import {counted, countText, metreText, percentText} from "../report/number-text.ts";
import {PAGE_END, pageStart} from "../report/page.ts";
import {definitionList, settingsPairs} from "../report/settings-text.ts";
import type {RowBand, RowOutcome} from "../study/outcome.ts";
import type {RunAbout} from "./opening.ts";
import type {RowProduct, RunFrame, TextSink} from "./product.ts";

/** Levels that get pictures; all have rasters. */
const LEVELS_SHOWN = 2;

interface Pair {
  readonly title: string;
  readonly value: GridPicture;
  readonly halfWidth: GridPicture;
}

interface Page {
  readonly frame: RunFrame;
  readonly delivery: Delivery;
  readonly source: Pair;
  readonly levels: readonly Pair[];
  /** Levels that are the source itself, at every row alike: they show its pictures. */
  readonly likeSource: boolean[];
  readonly ledger: GridLedger;
  readonly doubts: Doubts;
  readonly counts: Record<RowOutcome["status"], number>;
  readonly bases: Set<IntervalBasis>;
}

export function gridReportHtml(sink: TextSink, about: RunAbout): RowProduct {
  let page: Page;
  return {
    begin: async (frame) => {
      const grid = gridOf(frame);
      const pair = (title: string): Pair => ({title, value: gridPicture(grid), halfWidth: gridPicture(grid)});
      page = {
        frame,
        delivery: deliveryOf(frame.observable),
        source: pair("Source on the boundary"),
        levels: frame.levels.slice(0, LEVELS_SHOWN).map((level) => pair(`Field ${levelWords(level)}`)),
        likeSource: [],
        ledger: gridLedger(),
        doubts: doubtsOf(grid.orientation === "rows" ? "row" : "column"),
        counts: {done: 0, doubtful: 0, skipped: 0, failed: 0},
        bases: new Set(),
      };
      page.doubts.notices(frame.survey.notices);
    },
    row: async (outcome) => take(page, outcome),
    end: async () => {
      for (const piece of pieces(page, about)) await sink.write(piece);
    },
  };
}

function gridOf({survey}: RunFrame): NonNullable<RunFrame["survey"]["grid"]> {
  if (survey.grid === undefined) throw new Error("a grid's report was asked for a survey that is no grid");
  return survey.grid;
}

function take(page: Page, outcome: RowOutcome): void {
  ++page.counts[outcome.status];
  if (!("study" in outcome)) {
    page.doubts.failure(outcome.failure, outcome.id);
    return;
  }
  const {study, index} = outcome;
  const show = (pair: Pair, band: RowBand): void => {
    pair.value.take(index, band.value);
    pair.halfWidth.take(index, band.halfWidth);
  };
  show(page.source, study.source);
  page.levels.forEach((pair, k) => {
    const {band} = study.levels[k]!;
    if (band === study.source) page.likeSource[k] = true;
    else show(pair, band);
  });
  page.ledger.take(study);
  page.doubts.notices(study.notices, outcome.id);
  page.bases.add(study.choice.basis);
}

function* pieces(page: Page, about: RunAbout): Generator<string> {
  const {frame, delivery, counts, doubts} = page;
  const {survey, observable, confidence} = frame;
  const grid = gridOf(frame);
  const noun = grid.orientation === "rows" ? "row" : "column";
  const told = (["done", "doubtful", "skipped", "failed"] as const)
    .filter((status) => counts[status] > 0)
    .map((status) => `${countText(counts[status])} ${status}`);
  const total = counts.done + counts.doubtful + counts.skipped + counts.failed;

  yield pageStart(`Groundward report: ${survey.files.join(", ")}`);
  yield `<p class="over">Groundward ${escaped(about.version)}: a grid continued ${noun} by ${noun}</p>`;
  yield `<h1>${survey.files.map(nameText).join(", ")}</h1>`;
  yield `<p class="lede">${countText(grid.width)} by ${countText(grid.height)} pixels; ${counted(total, noun)}: ${told.join(", ")}. Readings: ${escaped(observable.summary)}.</p>`;
  yield cautionLead("grid");
  yield "<h2>The answer</h2>";
  if (counts.done + counts.doubtful === 0) yield `<p>No ${noun} could be answered; the reasons follow.</p>`;
  else {
    yield `<p>Each ${noun} on its own, over bodies that run on across it. Left: the value, at the boundary the average over the resolution length. Right: half the width of its ${percentText(confidence)} interval.</p>`;
    const shown = page.levels.map((pair, k) => (page.likeSource[k] ? {...page.source, title: pair.title} : pair));
    for (const pair of [page.source, ...shown]) {
      yield `<div class="grids"><figure>${pair.value.figure(`${pair.title}, ${delivery.field}`, delivery.toField)}</figure>`;
      yield `<figure>${pair.halfWidth.figure(`Half-width, ${delivery.field}`, delivery.toField)}</figure></div>`;
    }
    yield `<p class="small">Pictures hold no more than 600 pixels a side, means of the pixels beneath; the outermost hundredth of the values at either end shares the end colours; grey: no reading. The rasters hold every pixel.${
      frame.levels.length > LEVELS_SHOWN
        ? ` ${counted(frame.levels.length - LEVELS_SHOWN, "further level")} in rasters only.`
        : ""
    }</p>`;
    yield basisParagraphs(page.bases);
  }
  const grave = doubts.list(["failure", "doubt"]);
  yield `<h2>Doubts</h2>${grave === "" ? "<p>None was raised. That is not proof that there is none.</p>" : grave}`;
  const remarks = doubts.list(["remark"]);
  if (remarks !== "") yield `<h3>Remarks</h3>${remarks}`;
  yield `<h2>Before anyone relies on this</h2>${cautionBox("grid")}`;
  const pairs = page.ledger.pairs(delivery);
  if (pairs.length > 0) yield `<h2>All ${noun}s together</h2>${definitionList(pairs)}`;
  yield `<p class="small">lines.csv holds every ${noun}.</p>`;
  yield `<h2>Settings</h2>${definitionList([...settingsPairs(about.settings, survey), ["Pixels", `${metreText(grid.step)} m along a ${noun}, ${metreText(grid.spacing)} m from one to the next`]])}<p class="small">record.json holds every setting and the digests of all files.</p>`;
  yield `<h2>Once more</h2>${cautionBox("grid")}`;
  yield PAGE_END;
}
