/**
 * What can be asked for on a level: the boundary field itself by default, any observable, the field reduced to the
 * pole, or an amplitude, which does not depend on the direction of the source.
 */
import {InputError} from "../errors.ts";
import type {Dimension} from "../quantities.ts";
import {OBSERVABLES} from "./catalogue.ts";
import type {EffectiveDirection} from "./effective-direction.ts";
import type {Response} from "./kernel.ts";
import type {SourceLaw} from "./observable.ts";

export interface LevelQuantity {
  readonly name: string;
  readonly summary: string;
  readonly needsDirection: boolean;
  /** Which sources it can be asked of; undefined for any. */
  readonly method: SourceLaw["method"] | undefined;
  dimension(source: SourceLaw): Dimension;
  /** The length of two responses: no interval is known for it. Absent: one response. */
  readonly isAmplitude?: true;
  /** One response, or two whose root of squares is meant. */
  responses(direction: EffectiveDirection | undefined): readonly Response[];
}

const F: Response = {re: 1, im: 0, order: 0};

/** Re F: the boundary field carried up. */
export const BOUNDARY_FIELD: LevelQuantity = {
  name: "boundary-field",
  summary: "the downward component that the source itself is given in",
  needsDirection: false,
  method: undefined,
  dimension: (source) => source.fieldDimension,
  responses: () => [F],
};

/**
 * What the same body would read with vertical magnetisation in a vertical field, if it is magnetised along the Earth's
 * field: a constant turn of F by −i e^(iI′)/β, singular where β → 0.
 * Source: Blakely (1995), §12.3 (from memory).
 */
const poleReduced: LevelQuantity = {
  name: "pole-reduced",
  summary: "as if magnetised vertically in a vertical field; takes magnetisation along the Earth's field",
  needsDirection: true,
  method: "magnetic",
  dimension: (source) => source.fieldDimension,
  responses(direction) {
    if (direction === undefined) throw new Error("the reduction to the pole needs the direction of the field");
    const angle = (direction.inclination * Math.PI) / 180;
    return [{re: Math.sin(angle) / direction.beta, im: -Math.cos(angle) / direction.beta, order: 0}];
  },
};

const gradientOf = (source: SourceLaw): Dimension =>
  source.method === "gravity" ? "gravity-gradient" : "field-gradient";

export const LEVEL_QUANTITIES: readonly LevelQuantity[] = [
  BOUNDARY_FIELD,
  ...OBSERVABLES.map(
    (observable): LevelQuantity => ({
      name: observable.name,
      summary: observable.summary,
      needsDirection: observable.needsDirection,
      method: observable.source.method,
      dimension: () => observable.dimension,
      responses: (direction) => [observable.response(direction)],
    }),
  ),
  poleReduced,
  {
    name: "amplitude",
    summary: "|F|, the length of the field in the plane of the line",
    needsDirection: false,
    method: undefined,
    dimension: (source) => source.fieldDimension,
    isAmplitude: true,
    responses: () => [F, {re: 0, im: 1, order: 0}],
  },
  {
    name: "gradient-amplitude",
    summary: "|F′|, the length of its gradient",
    needsDirection: false,
    method: undefined,
    dimension: gradientOf,
    isAmplitude: true,
    responses: () => [
      {re: 1, im: 0, order: 1},
      {re: 0, im: 1, order: 1},
    ],
  },
];

/** @throws {InputError} `level/unknown-observable` */
export function levelQuantityNamed(name: string): LevelQuantity {
  const found = LEVEL_QUANTITIES.find((quantity) => quantity.name === name);
  if (found === undefined)
    throw new InputError(
      "level/unknown-observable",
      `--level-observable ${name} is not known here. Give one of ${LEVEL_QUANTITIES.map((quantity) => quantity.name).join(", ")}.`,
    );
  return found;
}
