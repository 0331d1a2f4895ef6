/** What a run over lines and a run over a grid do differently: outcomes, products, and what is printed. */
import {InputError} from "../lib/errors.ts";
import type {ByteSource} from "../lib/formats/byte-source.ts";
import {openRaster} from "../lib/formats/geotiff-read.ts";
import type {Notice} from "../lib/notice.ts";
import {GRID_PRODUCTS, gridProducts, lineProductKinds, lineProducts} from "../lib/products/catalogue.ts";
import type {RunFrame} from "../lib/products/product.ts";
import {studyGrid} from "../lib/study/grid-study.ts";
import {neighbouringStrips} from "../lib/study/neighbouring-strips.ts";
import type {LineOutcome, RowOutcome} from "../lib/study/outcome.ts";
import type {RowThreads} from "../lib/study/row-work.ts";
import type {Settings} from "../lib/study/settings.ts";
import {studySurvey} from "../lib/study/survey-study.ts";
import type {Survey} from "../lib/survey/survey.ts";
import {gridResult} from "./grid-result.ts";
import {lineResult, type RunResult} from "./line-result.ts";
import {shown} from "./printable.ts";
import {observableOf, type Run} from "./run.ts";

export interface Work<Outcome> {
  readonly outcomes: AsyncIterable<Outcome>;
  /** Whether they were computed before, and their progress told. */
  readonly computed: boolean;
  readonly products: readonly {
    begin(frame: RunFrame): Promise<void>;
    take(outcome: Outcome): Promise<void>;
    end(across: readonly Notice[]): Promise<void>;
  }[];
  readonly result: RunResult<Outcome>;
  /** What only several outcomes together can tell. */
  readonly across: {add(outcome: Outcome): void; notices(): readonly Notice[]} | undefined;
}

/** @param computed outcomes of the lines where they are there already */
export async function lineWork(
  {host, settings, survey, folder}: Run,
  computed?: AsyncIterable<LineOutcome>,
): Promise<Work<LineOutcome>> {
  const products = await lineProducts(folder, {version: host.version, settings});
  return {
    outcomes: computed ?? studySurvey(survey, settings),
    computed: computed !== undefined,
    products: products.map((product) => ({
      begin: (frame) => product.begin(frame),
      take: (outcome) => product.line(outcome),
      end: (across) => product.end(across),
    })),
    result: lineResult(observableOf(settings), settings.wanted),
    across: neighbouringStrips(settings.wanted.confidence),
  };
}

/**
 * @param file the grid, which says where the answers lie
 * @param threads that solve rows, if any
 * @throws {InputError} `option/lines-only`, and those of the raster
 */
export async function gridWork(
  {host, settings, survey, folder}: Run,
  file: ByteSource,
  threads?: RowThreads,
): Promise<Work<RowOutcome>> {
  const [strip] = settings.wanted.strips;
  if (strip !== undefined)
    throw new InputError(
      "option/lines-only",
      `${"area" in strip ? "--strips" : "--strip"} (${shown(strip.name)}) asks for means along a line, but the survey is a grid, whose answers are rasters. Leave it out, or take lines out of the grid with --profiles FILE.geojson or --every N.`,
    );
  const [also] = settings.wanted.also ?? [];
  if (also !== undefined)
    throw new InputError(
      "option/lines-only",
      `--also ${also} writes tables of lines, but the survey is a grid, whose levels are rasters. Leave it out.`,
    );
  if ((settings.model.ties ?? []).length > 0)
    throw new InputError(
      "option/lines-only",
      "--tie holds lines to known readings, but the survey is a grid, whose rows share one operator. Take lines across it with --profiles FILE.geojson or --every N.",
    );
  if (settings.wanted.trustFraction !== undefined)
    throw new InputError(
      "option/lines-only",
      "--trust-fraction compares the intervals of a line with the range of the field along it, and the survey is a grid, whose rows have no depth to trust. Leave it out, or take lines out of the grid with --profiles FILE.geojson or --every N.",
    );
  const products = await gridProducts(folder, {version: host.version, settings}, await openRaster(file));
  return {
    outcomes: studyGrid(survey, settings, threads),
    computed: false,
    products: products.map((product) => ({
      begin: (frame) => product.begin(frame),
      take: (outcome) => product.row(outcome),
      end: () => product.end(),
    })),
    result: gridResult(observableOf(settings)),
    across: undefined,
  };
}

/** Whether a run over this survey writes a file of that name. */
export function writesOf({kind}: Survey, settings: Settings): (name: string) => boolean {
  const kinds = kind === "grid" ? GRID_PRODUCTS : lineProductKinds(settings);
  const names = kinds.flatMap(({file}) => file.split(", "));
  return (name) => names.includes(name) || (kind === "grid" && /^(source|level_.*)_(row|column)wise\.tif$/.test(name));
}
