/**
 * The one place where units are converted. SI inside; a unit is met at the
 * edges, in `acquisition/` and `products/`.
 *
 * Sources: CODATA 2022 for G and μ0 (from memory of the published tables); 1 mGal = 1e-5 m/s²,
 * 1 E = 1e-9 s⁻², 1 nT = 1e-9 T by definition.
 */
import {InputError} from "./errors.ts";

/** Newtonian constant of gravitation, m³ kg⁻¹ s⁻² (CODATA 2018 and 2022 alike). */
export const GRAVITATIONAL_CONSTANT = 6.6743e-11;
/** Vacuum magnetic permeability, N A⁻² (CODATA 2022). */
export const VACUUM_PERMEABILITY = 1.25663706127e-6;

/** What a number measures; the dimension decides which units fit. */
export type Dimension = "gravity" | "gravity-gradient" | "field" | "field-gradient" | "length";

export interface Unit {
  readonly symbol: string;
  readonly dimension: Dimension;
  /** One unit in SI. */
  readonly factor: number;
}

const unit = (symbol: string, dimension: Dimension, factor: number): Unit => ({symbol, dimension, factor});

/** Every unit accepted for a reading, by the spelling that `--unit` takes. */
export const UNITS: readonly Unit[] = [
  unit("mGal", "gravity", 1e-5),
  unit("uGal", "gravity", 1e-8),
  unit("um/s2", "gravity", 1e-6),
  unit("gu", "gravity", 1e-6),
  unit("E", "gravity-gradient", 1e-9),
  unit("nT", "field", 1e-9),
  unit("pT", "field", 1e-12),
  unit("nT/m", "field-gradient", 1e-9),
  unit("pT/m", "field-gradient", 1e-12),
];

/** The unit in which answers of a dimension are printed and bounds are given. */
export const DELIVERY_UNIT: Readonly<Record<Dimension, Unit>> = {
  gravity: unit("mGal", "gravity", 1e-5),
  "gravity-gradient": unit("E", "gravity-gradient", 1e-9),
  field: unit("nT", "field", 1e-9),
  "field-gradient": unit("nT/m", "field-gradient", 1e-9),
  length: unit("m", "length", 1),
};

/**
 * The unit spelt `symbol`.
 * @throws {InputError} `unit/unknown`, `unit/wrong-dimension`
 */
export function unitFor(symbol: string, dimension: Dimension): Unit {
  const fitting = UNITS.filter((candidate) => candidate.dimension === dimension).map((candidate) => candidate.symbol);
  const found = UNITS.find((candidate) => candidate.symbol === symbol);
  if (found === undefined)
    throw new InputError("unit/unknown", `"${symbol}" is not a unit known here. Give one of ${fitting.join(", ")}.`);
  if (found.dimension !== dimension)
    throw new InputError(
      "unit/wrong-dimension",
      `Unit "${symbol}" measures ${found.dimension}, but the observable is of kind ${dimension}. Give one of ${fitting.join(", ")}, or correct the observable.`,
    );
  return found;
}
