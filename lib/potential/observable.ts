/**
 * What an instrument reads, as a linear functional of the boundary field f: every
 * observable is Re(α F) or Re(α F′) of the one analytic function F = P f + i Q f
 * above the boundary; see `kernel.ts`.
 */
import type {Dimension} from "../quantities.ts";
import type {EffectiveDirection} from "./effective-direction.ts";
import type {Response} from "./kernel.ts";

/** The law that turns the boundary field into sources. */
export interface SourceLaw {
  readonly method: "gravity" | "magnetic";
  /** What the density is, for headings and prose. */
  readonly density: string;
  /** The same in the few words that a column has room for. */
  readonly densityNoun: string;
  /** Unit of the density and of its integral across a strip, per metre of strike. */
  readonly densityUnit: "kg/m2" | "A/m";
  readonly totalUnit: "kg/m" | "A";
  /** SI density per SI boundary field. */
  readonly densityPerField: number;
  /** The dimension of the boundary field f. */
  readonly fieldDimension: Dimension;
}

export interface Observable {
  readonly name: string;
  readonly dimension: Dimension;
  readonly source: SourceLaw;
  /** One sentence for help texts. */
  readonly summary: string;
  /** A median beyond this, SI, is no anomaly; and the reduction that would be missing. */
  readonly anomalyLimit: {readonly value: number; readonly missing: string};
  /** Whether the direction of the Earth's field along the line must be known. */
  readonly needsDirection: boolean;
  /** α and the order of the derivative. `direction` is there where `needsDirection` is true. */
  response(direction: EffectiveDirection | undefined): Response;
}
