/**
 * The lines of tables, one after the other: a line is a run of rows with one identifier, or
 * of one heading. Every cell used is checked on the way. Memory: the longest line and one block of rows.
 */
import type {Table} from "../formats/delimited.ts";
import {type DecimalMark, requireNumber} from "../formats/number-cell.ts";
import {foldLongitude} from "../geometry/transformation.ts";
import {cutBefore, LEAST_STATIONS, type TrackPoint} from "./auto-split.ts";
import {type ColumnChoice, isText} from "./choose-columns.ts";
import {type GrowingColumn, growingColumn} from "./growing-column.ts";
import {requireTime} from "./time-cell.ts";

/** A line as it stands in the file: units of the file, positions not yet projected. */
export interface LineRun {
  /** As in the file; undefined where the file names no lines. */
  readonly name: string | undefined;
  readonly file: string;
  /** Row of the file of each station, from one. */
  readonly row: Float64Array;
  /** Role → one number a station; NaN only in roles that were not required. */
  readonly columns: ReadonlyMap<string, Float64Array>;
  /** Rows left out because a required number was missing. */
  readonly omitted: number;
  /** The row that the run begins at, also when no station is left. */
  readonly firstRow: number;
  /** Rows before or within the run that name no line. */
  readonly unnamed: number;
  /** Stations of turns and stops before this run, split by heading only. */
  readonly turns: number;
  /** The piece left after the last line, too short to be one: for counting only. */
  readonly remnant: boolean;
}

/** A table and the columns that are read of it. */
export interface ChosenTable {
  readonly table: Table;
  readonly choices: readonly ColumnChoice[];
}

export interface RunPlan {
  readonly tables: readonly ChosenTable[];
  /** Roles without which a row is no station. */
  readonly required: ReadonlySet<string>;
  /** Roles that are read. */
  readonly roles: ReadonlySet<string>;
  readonly split: "column" | "auto" | "whole";
}

/**
 * @throws {InputError} `table/text-in-number`, `table/infinite`, `table/text-in-time`, and those of the table
 */
export async function* lineRuns(plan: RunPlan): AsyncGenerator<LineRun> {
  for (const {table, choices} of plan.tables) yield* runsOfTable(table, choices, plan);
}

async function* runsOfTable(table: Table, choices: readonly ColumnChoice[], plan: RunPlan): AsyncGenerator<LineRun> {
  const {name: file, decimal} = table;
  const used = choices.filter(({role}) => plan.roles.has(role) && !isText(role));
  const time = plan.split === "auto" ? choices.find(({role}) => role === "time") : undefined;
  const line = plan.split === "column" ? choices.find(({role}) => role === "line") : undefined;
  const growing = used.map(growingColumn);
  const columns = new Map<string, GrowingColumn>(used.map(({role}, c) => [role, growing[c]!]));
  const rows = growingColumn();
  const times = growingColumn();
  const required = used.map(({role}) => plan.required.has(role));
  const track = trackOf(columns, times);
  let name: string | undefined;
  let begun = false;
  let firstRow = 0;
  let omitted = 0;
  let unnamed = 0;
  let turns = 0;
  let cutOnce = false;

  const takeRun = (count: number, remnant = false): LineRun => {
    const run: LineRun = {
      name,
      file,
      row: rows.takeFirst(count),
      columns: new Map([...columns].map(([role, column]) => [role, column.takeFirst(count)])),
      omitted,
      firstRow,
      unnamed,
      turns,
      remnant,
    };
    times.takeFirst(Math.min(count, times.length));
    omitted = unnamed = turns = 0;
    return run;
  };

  const texts = [line, time].flatMap((choice) => choice?.index ?? []);
  for await (const block of table.columns({numbers: used.map(({index}) => index), texts})) {
    const names = line === undefined ? undefined : block.texts[0]!;
    const clocks = time === undefined ? undefined : block.texts.at(-1)!;
    const needed = block.numbers.filter((_, c) => required[c]);
    // Stations of the block that are whole and of one line are taken together, the rows [taken, r).
    let taken = 0;
    const take = (to: number): void => {
      if (to > taken) {
        rows.append(block.rowNumbers, taken, to);
        for (let c = 0; c < used.length; ++c) growing[c]!.append(block.numbers[c]!, taken, to);
      }
      taken = to;
    };
    let [written, next] = ["", ""];
    for (let r = 0; r < block.count; ++r) {
      const row = block.rowNumbers[r]!;
      if (r === block.unread?.at) refuse(used, block.unread.cells, decimal, file, row);
      const whole = isWhole(needed, r);
      const seconds = clocks === undefined ? NaN : requireTime(clocks[r]!, decimal, {file, row, column: time!.column});
      if (names !== undefined) {
        if (names[r] !== written) {
          written = names[r]!;
          next = written.trim();
        }
        if (next === "") {
          ++unnamed;
          take(r);
          taken = r + 1;
          continue;
        }
        if (begun && next !== name) {
          take(r);
          yield takeRun(rows.length);
          firstRow = row;
        }
        name = next;
      }
      if (!begun) firstRow = row;
      begun = true;
      if (!whole) {
        ++omitted;
        take(r);
        taken = r + 1;
        continue;
      }
      if (plan.split !== "auto") continue;
      take(r + 1);
      times.push(seconds);
      const cut = cutBefore(track, rows.length - 1);
      if (cut === undefined) continue;
      cutOnce = true;
      if (cut >= LEAST_STATIONS) yield takeRun(cut);
      else {
        const [kept, passed] = [omitted, turns];
        takeRun(cut);
        omitted = kept;
        turns = passed + cut;
      }
      firstRow = rows.at(0);
    }
    take(block.count);
  }
  if (!begun) return;
  yield takeRun(rows.length, cutOnce && rows.length < LEAST_STATIONS);
}

function isWhole(needed: readonly Float64Array[], row: number): boolean {
  for (let c = 0; c < needed.length; ++c) if (Number.isNaN(needed[c]![row]!)) return false;
  return true;
}

/** @throws {InputError} for the first of the cells that is no number */
function refuse(
  used: readonly ColumnChoice[],
  cells: readonly string[],
  decimal: DecimalMark,
  file: string,
  row: number,
): void {
  used.forEach(({column}, c) => {
    requireNumber(cells[c]!, decimal, {file, row, column});
  });
}

/** The run without the stations that lack a number in one of `roles`. */
export function completeRun(run: LineRun, roles: Iterable<string>): LineRun {
  const looked = [...roles].flatMap((role) => run.columns.get(role) ?? []);
  if (!looked.some(hasGap)) return run;
  const kept = run.row.map((_, i) => (looked.every((column) => !Number.isNaN(column[i]!)) ? 1 : 0));
  const count = kept.reduce((sum, one) => sum + one, 0);
  const only = (column: Float64Array) => column.filter((_, i) => kept[i] === 1);
  return {
    ...run,
    row: only(run.row),
    columns: new Map([...run.columns].map(([role, column]) => [role, only(column)])),
    omitted: run.omitted + kept.length - count,
  };
}

function hasGap(column: Float64Array): boolean {
  for (let i = 0; i < column.length; ++i) if (Number.isNaN(column[i]!)) return true;
  return false;
}

/** Positions good enough to tell a heading by, from whatever places the stations. */
function trackOf(columns: ReadonlyMap<string, GrowingColumn>, times: GrowingColumn): (index: number) => TrackPoint {
  const [x, y] = [columns.get("x"), columns.get("y")];
  if (x !== undefined && y !== undefined) return (i) => ({x: x.at(i), y: y.at(i), time: times.at(i)});
  const [longitude, latitude] = [columns.get("longitude"), columns.get("latitude")];
  if (longitude !== undefined && latitude !== undefined)
    return (i) => ({
      // Degrees of latitude will do: only ratios of lengths and angles are used.
      x: foldLongitude(longitude.at(i) - longitude.at(0)) * Math.cos((latitude.at(i) * Math.PI) / 180),
      y: latitude.at(i),
      time: times.at(i),
    });
  const chainage = columns.get("chainage")!;
  return (i) => ({x: chainage.at(i), y: 0, time: times.at(i)});
}
