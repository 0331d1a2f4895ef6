/** What the inverse problem hands on. SI units (f in m/s² or T), lengths in m; multipliers belong to SI f. */
import type {Support} from "../geometry/interval.ts";
import type {Notice} from "../notice.ts";

/** Misfit and norm over a range of multipliers, multiplier increasing. */
export interface TradeoffCurve {
  readonly multiplier: Float64Array;
  /** Σ (residual/σ)². */
  readonly misfit: Float64Array;
  /** ‖f‖, SI·√m. */
  readonly norm: Float64Array;
  readonly degreesOfFreedom: Float64Array;
}

export type IntervalBasis = "given-bound" | "assumed-bound";

/** The Lagrange multiplier and why. */
export interface BoundChoice {
  readonly rule: string;
  readonly multiplier: number;
  /** M that the intervals take, SI·√m: given by the user, or assumed from the estimate. */
  readonly bound: number;
  readonly basis: IntervalBasis;
  /** Whether ‖f‖ = M holds the estimate back. */
  readonly active: boolean;
  /** In words, for ledger, report and record. */
  readonly reason: string;
  readonly notices: readonly Notice[];
}

/** One channel explained; entries align with the stations, SI. */
export interface ChannelFit {
  /** What the sensor would read of the source. */
  readonly field: Float64Array;
  readonly regional: Float64Array;
  /** Readings less field less regional. */
  readonly residual: Float64Array;
}

/** The source and what it explains. */
export interface SourceEstimate {
  /** f on the panels, SI. */
  readonly density: Float64Array;
  /** What it explains of each channel, in the order of the line's. */
  readonly channels: readonly ChannelFit[];
  /** Readings of all channels. */
  readonly readings: number;
  readonly misfit: number;
  readonly norm: number;
  readonly degreesOfFreedom: number;
  /** Modes kept by the eigen-decomposition; undefined where nothing was diagonalised. */
  readonly modes: number | undefined;
}

/** Averages of f with intervals, one entry a panel; SI. */
export interface PanelAverages {
  readonly value: Float64Array;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  /** Length averaged over, m. */
  readonly averagedOver: Float64Array;
}

/** A strip that the client names, on the chainage of its group. */
export interface Strip {
  readonly name: string;
  readonly from: number;
  readonly to: number;
  /** Only lines of this group; undefined: every line. */
  readonly group: string | undefined;
  /** Where a polygon of the map made it: its parts on this line, from the first at `from` to the last at `to`. */
  readonly parts?: Support;
}

/** The stretches of a strip. */
export const partsOf = ({parts, from, to}: Strip): Support => parts ?? [{from, to}];

/** Mean of f over a strip (zero outside the support) with its interval; SI. */
export interface StripEstimate {
  readonly strip: Strip;
  readonly mean: number;
  readonly lower: number;
  readonly upper: number;
  /** Its length square to the strike of the sources, m; absent: its length on the line. */
  readonly across?: number;
  /** The mean of the one source on the panels. */
  readonly plainMean: number;
}

/** Mean of the one source on the panels over a strip; SI. */
export type StripMean = Pick<StripEstimate, "strip" | "plainMean">;

/** What one rule makes of a line, for comparison. */
export interface RuleAnswer {
  readonly rule: string;
  /** Why this multiplier; without figures, why none. */
  readonly reason: string;
  readonly figures?: {
    readonly multiplier: number;
    /** M that its intervals would take, SI·√m. */
    readonly bound: number;
    readonly norm: number;
    readonly misfit: number;
    readonly degreesOfFreedom: number;
    /** m; Infinity where nothing is resolved. */
    readonly resolution: number;
    readonly strips: readonly StripMean[];
  };
}

/** What further channels add to the first. */
export interface ChannelGain {
  /** Their roles: `value.2` … */
  readonly further: readonly string[];
  /** Resolution of the first channel alone, m; Infinity where it resolves nothing. */
  readonly without: number;
}

/** The resolution of the estimate. */
export interface Resolution {
  /** Median over the stations above the support, m. */
  readonly length: number;
  /** 1/R(x, x) at each panel centre, R the averaging kernel, m. */
  readonly local: Float64Array;
  /** The widest below a station (or on the support, where no station lies above it), and its chainage: at line ends and gaps. */
  readonly worst: {readonly length: number; readonly at: number};
}

/** R(x, ·): what the estimate at x is an average of f with; zero off the support. */
export interface AveragingKernel {
  /** x, m. */
  readonly at: number;
  /** 1/R(x, x), m. */
  readonly width: number;
  /** Chainages t, increasing, and R(x, t), 1/m. */
  readonly chainage: Float64Array;
  readonly value: Float64Array;
}
