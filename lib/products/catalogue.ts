/** Every file that a run writes, record and timing apart. A new product is one file and one line here. */

import type {Settings} from "../study/settings.ts";
import type {AlsoWord} from "./also.ts";
import {boundsAssumedCsv} from "./bounds-assumed-csv.ts";
import {boundsCsv} from "./bounds-csv.ts";
import {gridRasters} from "./grid-rasters.ts";
import {gridReportHtml} from "./grid-report-html.ts";
import {levelsCsv} from "./levels-csv.ts";
import {levelsGdf2} from "./levels-gdf2.ts";
import {linesCsv, rowsCsv} from "./lines-csv.ts";
import type {GridPlace, Opening, RunAbout} from "./opening.ts";
import type {LineProduct, RowProduct} from "./product.ts";
import {reportHtml} from "./report-html.ts";
import {sourceCsv} from "./source-csv.ts";
import {stripsCsv} from "./strips-csv.ts";
import {tradeoffCsv} from "./tradeoff-csv.ts";

export interface LineProductKind {
  /** Names, apart by ", ". */
  readonly file: string;
  /** The word of `--also` that asks for it; absent: always written. */
  readonly also?: AlsoWord;
  /** Whether these settings ask for it; absent: they need not. */
  asked?(settings: Settings): boolean;
  /** One sentence for help texts. */
  readonly summary: string;
  make(opening: Opening, about: RunAbout): Promise<LineProduct>;
}

export interface GridProductKind {
  readonly file: string;
  readonly summary: string;
  make(opening: Opening, about: RunAbout, place: GridPlace): Promise<RowProduct>;
}

const LINE_PRODUCTS: readonly LineProductKind[] = [
  {
    file: "source.csv",
    summary: "the source on every panel, with averages and their intervals",
    make: async ({openText}) => sourceCsv(await openText("source.csv")),
  },
  {
    file: "levels.csv",
    summary: "the field on every level, with intervals",
    make: async ({openText}) => levelsCsv(await openText("levels.csv")),
  },
  {
    file: "levels.dfn, levels.dat",
    also: "gdf2",
    summary: "the rows of levels.csv as an ASEG-GDF2 pair",
    make: async (opening) => levelsGdf2(opening),
  },
  {
    file: "strips.csv",
    summary: "mean and total of every strip in physical units, with intervals",
    make: async ({openText}) => stripsCsv(await openText("strips.csv")),
  },
  {
    file: "bounds_assumed.csv",
    asked: ({bound}) => bound.name !== "given",
    summary: "where no bound was given: the answers at half, once, twice and four times the one that was assumed",
    make: async ({openText}) => boundsAssumedCsv(await openText("bounds_assumed.csv")),
  },
  {
    file: "lines.csv",
    summary: "the ledger: what became of every line, and why",
    make: async ({openText}) => linesCsv(await openText("lines.csv")),
  },
  {
    file: "tradeoff.csv",
    summary: "misfit against norm over the multipliers",
    make: async ({openText}) => tradeoffCsv(await openText("tradeoff.csv")),
  },
  {
    file: "bounds.csv",
    asked: ({bound}) => bound.compared !== undefined,
    summary: "what each rule for the bound makes of every line",
    make: async ({openText}) => boundsCsv(await openText("bounds.csv")),
  },
  {
    file: "report.html",
    summary: "one page to read and print",
    make: async ({openText}, about) => reportHtml(await openText("report.html"), about),
  },
];

export const GRID_PRODUCTS: readonly GridProductKind[] = [
  {
    file: "source_rowwise.tif, level_L_rowwise.tif",
    summary: "source and levels with half-widths, row by row (columnwise: column by column)",
    make: async (opening, _about, place) => gridRasters(opening, place),
  },
  {
    file: "lines.csv",
    summary: "the ledger: what became of every row, and why",
    make: async ({openText}) => rowsCsv(await openText("lines.csv")),
  },
  {
    file: "report.html",
    summary: "one page to read and print",
    make: async ({openText}, about) => gridReportHtml(await openText("report.html"), about),
  },
];

/** Those that a run with these settings writes. */
export const lineProductKinds = (settings: Settings): readonly LineProductKind[] =>
  LINE_PRODUCTS.filter(
    ({also, asked}) => (also === undefined || settings.wanted.also?.includes(also)) && (asked?.(settings) ?? true),
  );

/** Opens the files of a run over lines; `begin` none before all are open. */
export async function lineProducts(opening: Opening, about: RunAbout): Promise<readonly LineProduct[]> {
  const products: LineProduct[] = [];
  for (const kind of lineProductKinds(about.settings)) products.push(await kind.make(opening, about));
  return products;
}

/** Opens the files of a run over a grid; rasters are opened by name at the end, when their bytes are ready. */
export async function gridProducts(
  opening: Opening,
  about: RunAbout,
  place: GridPlace,
): Promise<readonly RowProduct[]> {
  const products: RowProduct[] = [];
  for (const kind of GRID_PRODUCTS) products.push(await kind.make(opening, about, place));
  return products;
}
