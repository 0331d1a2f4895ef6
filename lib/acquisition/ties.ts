/** Reads ties: a table with one known reading a row. */
import {InputError, type Place} from "../errors.ts";
import type {ByteSource} from "../formats/byte-source.ts";
import {openTable} from "../formats/delimited.ts";
import {requireNumber} from "../formats/number-cell.ts";
import {observableNamed} from "../potential/catalogue.ts";
import type {Observable} from "../potential/observable.ts";
import {DELIVERY_UNIT} from "../quantities.ts";
import type {Tie} from "../survey/tie.ts";

const COLUMNS = ["line", "chainage", "x", "y", "elevation", "value", "tolerance", "observable"] as const;
type Column = (typeof COLUMNS)[number];

/**
 * Columns `line, chainage` or `x, y`, `elevation`, `value`, and if wanted `tolerance` and `observable`; values and
 * tolerances in the delivery unit of their observable.
 *
 * @param observable of rows that name none
 * @throws {InputError} `tie/…`, and those of tables
 */
export async function readTies(source: ByteSource, observable: Observable): Promise<readonly Tie[]> {
  const table = await openTable(source);
  const columns = new Map<Column, number>();
  table.header.forEach((name, i) => {
    const found = COLUMNS.find((column) => column === name.trim().toLowerCase());
    if (found !== undefined) columns.set(found, i);
  });
  const head: Place = {file: source.name, row: 1};
  for (const needed of ["line", "elevation", "value"] as const)
    if (!columns.has(needed))
      throw new InputError(
        "tie/missing-column",
        `${source.name} has no column ${needed}; ties need line, chainage (or x, y), elevation and value. Columns there: ${table.header.slice(0, 20).join(", ")}.`,
        {place: head},
      );
  if (!columns.has("chainage") && !(columns.has("x") && columns.has("y")))
    throw new InputError(
      "tie/missing-column",
      `${source.name} says of no tie where it is: a column chainage, or both x and y, was needed.`,
      {place: head},
    );
  const ties: Tie[] = [];
  for await (const {rowNumbers, rows} of table.blocks())
    rows.forEach((cells, k) => {
      const row = rowNumbers[k]!;
      const text = (column: Column): string => cells[columns.get(column) ?? -1] ?? "";
      const number = (column: Column): number => {
        const place = {file: source.name, row, column};
        const found = requireNumber(text(column), table.decimal, place);
        if (!Number.isFinite(found))
          throw new InputError(
            "tie/empty",
            `A tie needs a number in column ${column}. Complete the row or leave it out.`,
            {place},
          );
        return found;
      };
      const kind = text("observable") === "" ? observable : observableNamed(text("observable"));
      if (kind.source.method !== observable.source.method)
        throw new InputError(
          "tie/other-source",
          `A tie of ${kind.name} cannot hold ${observable.name} readings: they have other sources. Leave it out.`,
          {place: {file: source.name, row, column: "observable"}},
        );
      const {factor} = DELIVERY_UNIT[kind.dimension];
      const tolerance = text("tolerance") === "" ? 0 : number("tolerance") * factor;
      if (!(tolerance >= 0))
        throw new InputError(
          "tie/tolerance",
          `The tolerance of a tie is ${text("tolerance")}; a standard deviation of 0 (exactly) or above was needed.`,
          {place: {file: source.name, row, column: "tolerance"}},
        );
      ties.push({
        line: text("line"),
        at: columns.has("chainage") ? {chainage: number("chainage")} : {x: number("x"), y: number("y")},
        elevation: number("elevation"),
        value: number("value") * factor,
        tolerance,
        observable: kind,
        place: {file: source.name, row},
      });
    });
  return ties;
}
