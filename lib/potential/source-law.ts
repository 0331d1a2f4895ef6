/**
 * The surface layer equivalent to a boundary field.
 *
 * Just above a surface density σ, g_z = 2πGσ; just above a pole density M·n, |B_z| = μ0 M / 2.
 * Source: Blakely, Potential Theory in Gravity and Magnetic Applications (1995), ch. 3 and 5 (from memory);
 * both follow from Gauss's law over a pillbox.
 */
import {GRAVITATIONAL_CONSTANT, VACUUM_PERMEABILITY} from "../quantities.ts";
import type {SourceLaw} from "./observable.ts";

export const GRAVITY_LAYER: SourceLaw = {
  method: "gravity",
  density: "surface density",
  densityNoun: "surface density",
  densityUnit: "kg/m2",
  totalUnit: "kg/m",
  densityPerField: 1 / (2 * Math.PI * GRAVITATIONAL_CONSTANT),
  fieldDimension: "gravity",
};

export const MAGNETIC_LAYER: SourceLaw = {
  method: "magnetic",
  density: "sheet magnetisation, positive down",
  densityNoun: "sheet magnetisation",
  densityUnit: "A/m",
  totalUnit: "A",
  densityPerField: 2 / VACUUM_PERMEABILITY,
  fieldDimension: "field",
};
