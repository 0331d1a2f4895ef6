/** What became of a line: its study, or why there is none. */
import type {AtBound} from "../continuation/at-bounds.ts";
import type {LevelProfile, LevelSetting} from "../continuation/level-profile.ts";
import type {Trust} from "../continuation/trust.ts";
import type {ReportableError} from "../errors.ts";
import type {IntervalKind} from "../inverse/interval-kind.ts";
import type {
  AveragingKernel,
  BoundChoice,
  ChannelGain,
  PanelAverages,
  Resolution,
  RuleAnswer,
  SourceEstimate,
  StripEstimate,
  TradeoffCurve,
} from "../inverse/nouns.ts";
import type {Notice} from "../notice.ts";
import type {Panels} from "../operators/panels.ts";
import type {Observable} from "../potential/observable.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {ChannelNoises} from "./noises.ts";

export interface LineStudy {
  readonly line: SurveyLine;
  readonly observable: Observable;
  readonly conditioned: ConditionedLine;
  readonly panels: Panels;
  readonly curve: TradeoffCurve;
  readonly choice: BoundChoice;
  /** What each rule makes of the line, where that was asked. */
  readonly comparison?: readonly RuleAnswer[];
  readonly estimate: SourceEstimate;
  readonly resolution: Resolution;
  /** At a handful of places along the line, chainage increasing. */
  readonly kernels: readonly AveragingKernel[];
  /** Undefined where there is one channel. */
  readonly gain: ChannelGain | undefined;
  /** What three ways say of the noise, one entry a channel. */
  readonly noises: readonly ChannelNoises[];
  readonly averages: PanelAverages;
  readonly levels: readonly LevelProfile[];
  readonly strips: readonly StripEstimate[];
  /** The lowest level where the field is data rather than bound; undefined where there are no intervals. */
  readonly trust: Trust | undefined;
  /** The intervals at multiples of an assumed bound, factor increasing; undefined where the bound was given. */
  readonly atBounds: readonly AtBound[] | undefined;
  readonly confidence: number;
  /** Absent: single. */
  readonly intervals?: IntervalKind | undefined;
  /** Every doubt and remark of the line, acquisition to answer. */
  readonly notices: readonly Notice[];
}

export type LineOutcome =
  | {readonly status: "done" | "doubtful"; readonly id: string; readonly study: LineStudy}
  | {readonly status: "skipped" | "failed"; readonly id: string; readonly failure: ReportableError};

/** One raster of answers along one row (or column): NaN where the grid holds no reading. */
export interface RowBand {
  readonly value: Float64Array;
  readonly halfWidth: Float64Array;
}

/** One row (or column) of a grid, answered at every pixel that holds a reading; SI. */
export interface RowStudy {
  readonly source: RowBand;
  readonly levels: readonly {readonly setting: LevelSetting; readonly band: RowBand}[];
  /** For the ledger. */
  readonly stations: number;
  readonly panels: number;
  /** Undefined where nothing was diagonalised. */
  readonly modes: number | undefined;
  readonly choice: BoundChoice;
  readonly norm: number;
  readonly misfit: number;
  readonly misfitExpected: number;
  readonly noise: number;
  /** Length over which it is correlated, m; 0: white. */
  readonly noiseLength: number;
  readonly resolution: number;
  readonly degreesOfFreedom: number;
  readonly notices: readonly Notice[];
}

export type RowOutcome =
  | {readonly status: "done" | "doubtful"; readonly id: string; readonly index: number; readonly study: RowStudy}
  | {
      readonly status: "skipped" | "failed";
      readonly id: string;
      readonly index: number;
      readonly failure: ReportableError;
    };
