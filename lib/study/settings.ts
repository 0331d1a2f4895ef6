/**
 * Every setting of a run: one noun a stage, unit, default and why. SI and metres;
 * the edge that reads options and job files converts.
 */
import type {AcquisitionSettings} from "../acquisition/settings.ts";
import type {LevelSetting} from "../continuation/level-profile.ts";
import type {Interval} from "../geometry/interval.ts";
import type {MapArea} from "../geometry/map-area.ts";
import type {IntervalKind} from "../inverse/interval-kind.ts";
import type {Strip} from "../inverse/nouns.ts";
import type {BoundRule} from "../inverse/rules/rule.ts";
import type {LevelQuantity} from "../potential/level-quantity.ts";
import type {BoundarySetting} from "../survey/boundary.ts";
import type {FieldDirectionSetting} from "../survey/field-direction.ts";
import type {Tie} from "../survey/tie.ts";

/** A stretch of chainage. */
export interface ChainageZone extends Interval {
  /** Only lines of this group; undefined: every line. */
  readonly group: string | undefined;
}

/** An area of the map: of each line the part inside. */
export interface MapZone {
  readonly area: MapArea;
}

export type SupportSetting = ChainageZone | MapZone;

export type StripSetting = Strip | (MapZone & {readonly name: string});

export interface ModelSettings {
  /** Undefined: the ground under a sensor known by clearance only, with a doubt; else it must be given. */
  readonly boundary: BoundarySetting | undefined;
  /** Empty: the line and an apron of five median heights either side, since a source that far out adds a few per cent of its strength at most. */
  readonly support: readonly SupportSetting[];
  /** Azimuth that sources run along, degrees clockwise from true north; absent: square to each line. */
  readonly strike?: number | undefined;
  /** Known readings that the answer must meet; absent: none. */
  readonly ties?: readonly Tie[] | undefined;
  /** m; undefined: a quarter of the least height, an eighth with a gradient, see `panelsOfLine`. */
  readonly panel: number | undefined;
  /** Degree of the polynomial estimated together with the source, −1 for none; default 1: anomalies keep a level and a slope of unknown origin. */
  readonly regional: -1 | 0 | 1 | 2 | 3;
}

export interface WantedSettings {
  /** Default: level 0. */
  readonly levels: readonly LevelSetting[];
  readonly strips: readonly StripSetting[];
  /** What is given on the levels; default: the boundary field, Re F. */
  readonly levelQuantity?: LevelQuantity | undefined;
  /** Coverage of every interval; default 0.95. */
  readonly confidence: number;
  /** Share of the range of the field that an interval may span at the depth to trust; default 0.25. */
  readonly trustFraction?: number | undefined;
  /** Whether each interval covers by itself or all of a line at once; absent: single. */
  readonly intervals?: IntervalKind | undefined;
  /** Products beside those that are always written, by their words; absent: none. */
  readonly also?: readonly string[];
}

export interface Settings {
  readonly acquisition: AcquisitionSettings;
  /** Undefined where no observable needs it. */
  readonly fieldDirection?: FieldDirectionSetting | undefined;
  readonly model: ModelSettings;
  /** Default: discrepancy. */
  readonly bound: BoundRule;
  readonly wanted: WantedSettings;
  /** What was already done to the data, carried into record and report. */
  readonly processing: string | undefined;
}
