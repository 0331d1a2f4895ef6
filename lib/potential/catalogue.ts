/** Every observable, by name. Help texts, option parsing and the report read this list. */
import {InputError} from "../errors.ts";
import {downwardGradient} from "./downward-gradient.ts";
import {fieldAlong} from "./field-along.ts";
import {fieldVertical} from "./field-vertical.ts";
import {gravity} from "./gravity.ts";
import {gravityAlong} from "./gravity-along.ts";
import {gravityGradient} from "./gravity-gradient.ts";
import type {Observable} from "./observable.ts";
import {totalFieldAnomaly} from "./total-field-anomaly.ts";

export const OBSERVABLES: readonly Observable[] = [
  gravity,
  gravityAlong,
  gravityGradient,
  fieldVertical,
  fieldAlong,
  totalFieldAnomaly,
  downwardGradient(fieldVertical),
  downwardGradient(fieldAlong),
  downwardGradient(totalFieldAnomaly),
];

/** @throws {InputError} `observable/unknown` */
export function observableNamed(name: string): Observable {
  const found = OBSERVABLES.find((candidate) => candidate.name === name);
  if (found === undefined)
    throw new InputError(
      "observable/unknown",
      `"${name}" is not an observable known here. Give one of ${OBSERVABLES.map((candidate) => candidate.name).join(", ")}.`,
    );
  return found;
}
