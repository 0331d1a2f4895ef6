/** lines.csv, the ledger: what became of every line, or of every row of a grid, and why. */
import {csvCell, csvNumber} from "../formats/csv-text.ts";
import type {BoundChoice} from "../inverse/nouns.ts";
import type {Notice} from "../notice.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import type {LineOutcome, LineStudy, RowOutcome, RowStudy} from "../study/outcome.ts";
import {type CsvTable, csvTable} from "./csv-table.ts";
import type {LineProduct, RowProduct, RunFrame, TextSink} from "./product.ts";

/** The figures of one row of the ledger; SI. */
interface LedgerFigures {
  readonly stations: number;
  readonly panels: number;
  readonly modes: number | undefined;
  readonly choice: BoundChoice;
  readonly norm: number;
  readonly misfit: number;
  readonly misfitExpected: number;
  readonly noise: number;
  readonly resolution: number;
  readonly degreesOfFreedom: number;
  /** The lowest level to trust, m; NaN where there is none; absent: not looked for. */
  readonly trusted?: number;
  /** By the fourth differences of the record, and by the shortest waves of the residual; undefined where they do not say. */
  readonly noiseOfRecord: number | undefined;
  readonly noiseOfSpectrum: number | undefined;
  readonly noiseLength: number;
  readonly notices: readonly Notice[];
}

const figuresOfLine = (study: LineStudy): LedgerFigures => ({
  stations: study.line.stations.count,
  panels: study.panels.count,
  modes: study.estimate.modes,
  choice: study.choice,
  norm: study.estimate.norm,
  misfit: study.estimate.misfit,
  misfitExpected: study.estimate.readings,
  noise: study.conditioned.channels[0]!.noise,
  resolution: study.resolution.length,
  degreesOfFreedom: study.estimate.degreesOfFreedom,
  trusted: study.trust?.level ?? Number.NaN,
  noiseOfRecord: study.noises[0]?.record,
  noiseOfSpectrum: study.noises[0]?.spectrum,
  noiseLength: study.conditioned.channels[0]!.noiseLength,
  notices: study.notices,
});

/** A grid is smooth: rows show no noise of their own. */
const figuresOfRow = (study: RowStudy): LedgerFigures => ({
  ...study,
  noiseOfRecord: undefined,
  noiseOfSpectrum: undefined,
});

/** Why the multiplier is what it is, then every doubt. */
const reasonOf = (figures: LedgerFigures): string =>
  [
    figures.choice.reason,
    ...figures.notices.filter((notice) => notice.weight === "doubt").map((notice) => notice.message),
  ].join("; ");

/** Columns after `reason`, for a line without an answer. */
const NO_FIGURES: readonly string[] = Array.from({length: 16}, () => "");

function ledger(sink: TextSink) {
  const table: CsvTable = csvTable(sink);
  let delivery: Delivery;
  return {
    begin: async ({observable}: RunFrame): Promise<void> => {
      delivery = deliveryOf(observable);
      await table.row([
        "line",
        "status",
        "reason",
        "stations",
        "panels",
        "modes",
        "multiplier",
        "bound",
        "norm",
        "bound_active",
        "misfit",
        "misfit_expected",
        `noise_${delivery.reading}`,
        "resolution_m",
        "degrees_of_freedom",
        "trusted_level_m",
        `noise_record_${delivery.reading}`,
        `noise_spectrum_${delivery.reading}`,
        "noise_length_m",
      ]);
    },
    done: async (id: string, status: string, figures: LedgerFigures): Promise<void> => {
      await table.row([
        csvCell(id),
        status,
        csvCell(reasonOf(figures)),
        csvNumber(figures.stations),
        csvNumber(figures.panels),
        csvNumber(figures.modes),
        csvNumber(delivery.toMultiplier(figures.choice.multiplier)),
        csvNumber(delivery.toNorm(figures.choice.bound)),
        csvNumber(delivery.toNorm(figures.norm)),
        String(figures.choice.active),
        csvNumber(figures.misfit),
        csvNumber(figures.misfitExpected),
        csvNumber(delivery.toReading(figures.noise)),
        csvNumber(figures.resolution),
        csvNumber(figures.degreesOfFreedom),
        csvNumber(figures.trusted),
        ...[figures.noiseOfRecord, figures.noiseOfSpectrum].map((noise) =>
          csvNumber(noise === undefined ? undefined : delivery.toReading(noise)),
        ),
        csvNumber(figures.noiseLength),
      ]);
      await table.flush();
    },
    without: async (id: string, status: string, message: string): Promise<void> => {
      await table.row([csvCell(id), status, csvCell(message), ...NO_FIGURES]);
      await table.flush();
    },
    end: () => table.flush(),
  };
}

/** Rows wait for the end: what a line's neighbours say of it is known last. A few hundred bytes a line. */
export function linesCsv(sink: TextSink): LineProduct {
  const rows = ledger(sink);
  const held: {readonly id: string; readonly status: string; readonly figures: LedgerFigures | string}[] = [];
  return {
    begin: rows.begin,
    line: async (outcome: LineOutcome) => {
      const {id, status} = outcome;
      held.push({id, status, figures: "study" in outcome ? figuresOfLine(outcome.study) : outcome.failure.message});
    },
    end: async (across = []) => {
      for (const {id, status, figures} of held)
        if (typeof figures === "string") await rows.without(id, status, figures);
        else {
          const own = across.filter(({lines}) => lines?.includes(id));
          await rows.done(id, status, {...figures, notices: [...figures.notices, ...own]});
        }
      await rows.end();
    },
  };
}

export function rowsCsv(sink: TextSink): RowProduct {
  const rows = ledger(sink);
  return {
    begin: rows.begin,
    row: (outcome: RowOutcome) =>
      "study" in outcome
        ? rows.done(outcome.id, outcome.status, figuresOfRow(outcome.study))
        : rows.without(outcome.id, outcome.status, outcome.failure.message),
    end: rows.end,
  };
}
