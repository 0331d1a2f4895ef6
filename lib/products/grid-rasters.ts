/**
 * The rasters of a grid run: source and levels, each with value and half-width, of the same size
 * and place as the input. A row without an answer is left without values.
 */
import {levelLabel} from "../continuation/level-profile.ts";
import {type CogSettings, type CogWriter, openCog} from "../formats/cog-write.ts";
import {BOUNDARY_FIELD} from "../potential/level-quantity.ts";
import {cautionSentence, ROW_BY_ROW} from "../report/cautions.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import {levelWords} from "../report/level-words.ts";
import {percentText} from "../report/number-text.ts";
import type {RowBand, RowOutcome, RowStudy} from "../study/outcome.ts";
import type {GridFrame} from "../survey/survey.ts";
import type {GridPlace, Opening} from "./opening.ts";
import type {RowProduct, RunFrame} from "./product.ts";
import {type Transposition, transposition} from "./transposition.ts";

interface Raster {
  /** Files of the same pixels, and what each says of its bands. */
  readonly files: readonly {readonly name: string; readonly bands: CogSettings["bands"]}[];
  /** Whether it is a level rather than the source. */
  readonly level: boolean;
  readonly bandOf: (study: RowStudy) => RowBand;
  readonly writer: CogWriter;
  /** Between columns that come and rows that go; undefined where rows come. */
  readonly turned: Transposition | undefined;
}

/** Characters that every file system takes in a name; all others become `%` and their bytes in UTF-8. */
export const fileSafe = (label: string): string =>
  [...new TextEncoder().encode(label)]
    .map((byte) => {
      const character = String.fromCharCode(byte);
      return /[A-Za-z0-9+.-]/.test(character) ? character : `%${byte.toString(16).toUpperCase().padStart(2, "0")}`;
    })
    .join("");

export function gridRasters(opening: Opening, place: GridPlace): RowProduct {
  let rasters: readonly Raster[] = [];
  let grid: GridFrame;
  let delivery: Delivery;
  let next = 0;
  let nothing: RowBand;

  /** Writes one row or column of every raster. */
  const put = async (study: RowStudy | undefined): Promise<void> => {
    for (const {bandOf, writer, turned, level} of rasters) {
      const {value, halfWidth} = study === undefined ? nothing : bandOf(study);
      const delivered = level ? delivery.toLevel : delivery.toField;
      const bands = [value.map(delivered), halfWidth.map(delivered)];
      if (turned === undefined) await writer.writeRows(bands, 1);
      else await turned.column(bands);
    }
    ++next;
  };
  const putNothingUntil = async (index: number): Promise<void> => {
    while (next < index) await put(undefined);
  };

  return {
    begin: async (frame) => {
      const {survey} = frame;
      if (survey.grid === undefined) throw new Error("rasters were asked for a survey that is no grid");
      grid = survey.grid;
      delivery = deliveryOf(frame.observable, frame.quantity);
      const length = grid.orientation === "rows" ? grid.width : grid.height;
      const absent = new Float64Array(length).fill(Number.NaN);
      nothing = {value: absent, halfWidth: absent};
      rasters = await openRasters(frame, grid, delivery, opening, place);
    },
    row: async (outcome: RowOutcome) => {
      if (outcome.index < next) throw new RangeError(`row ${outcome.index} came after row ${next - 1}`);
      await putNothingUntil(outcome.index);
      await put("study" in outcome ? outcome.study : undefined);
    },
    end: async () => {
      await putNothingUntil(grid.orientation === "rows" ? grid.height : grid.width);
      for (const {files, writer, turned} of rasters) {
        if (turned !== undefined)
          for await (const block of turned.rows()) await writer.writeRows(block.bands, block.count);
        for (const {name, bands} of files) await writer.finish(await opening.openBytes(name), bands);
      }
    },
  };
}

async function openRasters(
  frame: RunFrame,
  grid: GridFrame,
  delivery: Delivery,
  {openScratch}: Opening,
  {georeference, nodataText}: GridPlace,
): Promise<readonly Raster[]> {
  const {width, height, orientation} = grid;
  const way = orientation === "rows" ? "row by row, two-dimensional" : "column by column, two-dimensional";
  const suffix = orientation === "rows" ? "rowwise" : "columnwise";
  const percent = percentText(frame.confidence).replace("\u202f", " ");
  const bandsOf = (what: string, unit: string): CogSettings["bands"] => [
    {description: `${what}, ${way}`, unit},
    {description: `half-width of the ${percent} interval, ${way}`, unit},
  ];
  const one = async (files: Raster["files"], level: boolean, bandOf: Raster["bandOf"]): Promise<Raster> => ({
    files,
    bandOf,
    level,
    writer: openCog(
      {
        width,
        height,
        bands: files[0]!.bands,
        georeference,
        nodataText,
        items: [["CAUTION", cautionSentence(ROW_BY_ROW)]],
      },
      await openScratch(),
    ),
    turned: orientation === "rows" ? undefined : transposition(width, height, 2, await openScratch()),
  });
  const levels = frame.levels.map((level, k) => ({
    k,
    // On the boundary the boundary field is the source: one compression serves both files.
    isSource:
      level.kind === "above-boundary" &&
      level.height === 0 &&
      frame.quantity === BOUNDARY_FIELD &&
      delivery.level === delivery.field,
    name: `level_${fileSafe(levelLabel(level))}_${suffix}.tif`,
    bands: bandsOf(
      `${frame.quantity === BOUNDARY_FIELD ? "field" : frame.quantity.name} ${levelWords(level).replace("\u2212", "-")}`,
      delivery.level,
    ),
  }));
  const source = {name: `source_${suffix}.tif`, bands: bandsOf("source on the boundary", delivery.field)};
  const rasters = [await one([source, ...levels.filter(({isSource}) => isSource)], false, (study) => study.source)];
  for (const level of levels)
    if (!level.isSource) rasters.push(await one([level], true, (study) => study.levels[level.k]!.band));
  return rasters;
}
