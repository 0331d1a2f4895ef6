/** All that was asked, as the settings of a run. */
import {InputError} from "../../lib/errors.ts";
import {OBSERVABLES, observableNamed} from "../../lib/potential/catalogue.ts";
import type {Settings} from "../../lib/study/settings.ts";
import {boundFrom, modelFrom} from "./assumed.ts";
import {type Asked, oneOf} from "./entry.ts";
import {acquisitionFrom} from "./measured.ts";
import {wantedFrom} from "./wanted.ts";

/**
 * @throws {InputError} `option/missing` without an observable; `option/…`, `unit/…`, `observable/unknown`, `support/…`, `bound/…`
 */
export function settingsFrom(asked: Asked): Settings {
  const observable = oneOf(asked, "observable");
  if (observable === undefined)
    throw new InputError(
      "option/missing",
      `--observable is missing: nothing says what the values are. Give one of ${OBSERVABLES.map(({name}) => name).join(", ")}, for example --observable ${OBSERVABLES[0]!.name}.`,
    );
  return {
    acquisition: acquisitionFrom(asked),
    model: modelFrom(asked),
    bound: boundFrom(asked, observableNamed(observable)),
    wanted: wantedFrom(asked),
    processing: oneOf(asked, "processing"),
  };
}
