/** The units of a run's answers and the factors that lead there from SI; the factors themselves stand in `quantities.ts`. */
import {BOUNDARY_FIELD, type LevelQuantity} from "../potential/level-quantity.ts";
import type {Observable} from "../potential/observable.ts";
import {DELIVERY_UNIT} from "../quantities.ts";

export interface Delivery {
  /** Unit of the boundary field and of the source, for headings: `mGal`. */
  readonly field: string;
  /** Unit of what is given on levels. */
  readonly level: string;
  /** Unit of readings and their noise. */
  readonly reading: string;
  /** Unit of the density and of its total across a strip per metre of strike. */
  readonly density: string;
  readonly total: string;
  /** What the density is called: `surface density`. */
  readonly densityNoun: string;
  toField(si: number): number;
  toLevel(si: number): number;
  toReading(si: number): number;
  toDensity(si: number): number;
  /** ‖f‖ from SI·√m to U·√m. */
  toNorm(si: number): number;
  /**
   * α that belongs to f in U. With f = factor·f_U the penalty α‖f‖² equals (α·factor²)‖f_U‖²,
   * so that d(misfit)/d(norm²) = −α holds among delivered numbers as it does in SI.
   */
  toMultiplier(si: number): number;
}

/** @param quantity what is given on levels */
export function deliveryOf(observable: Observable, quantity: LevelQuantity = BOUNDARY_FIELD): Delivery {
  const level = DELIVERY_UNIT[quantity.dimension(observable.source)];
  const field = DELIVERY_UNIT[observable.source.fieldDimension];
  const reading = DELIVERY_UNIT[observable.dimension];
  const {densityPerField, densityUnit, totalUnit, densityNoun} = observable.source;
  return {
    field: field.symbol,
    level: level.symbol,
    reading: reading.symbol,
    density: densityUnit,
    total: totalUnit,
    densityNoun,
    toField: (si) => si / field.factor,
    toLevel: (si) => si / level.factor,
    toReading: (si) => si / reading.factor,
    toDensity: (si) => si * densityPerField,
    toNorm: (si) => si / field.factor,
    toMultiplier: (si) => si * field.factor * field.factor,
  };
}
