/** All that was asked, as the settings of a run. */
import {InputError} from "../../lib/errors.ts";
import {OBSERVABLES, observableNamed} from "../../lib/potential/catalogue.ts";
import type {Settings} from "../../lib/study/settings.ts";
import type {Tie} from "../../lib/survey/tie.ts";
import {boundFrom, modelFrom} from "./assumed.ts";
import {fieldDirectionFrom, observableAsked} from "./channels.ts";
import {type Asked, oneOf} from "./entry.ts";
import type {MapFiles} from "./map-file.ts";
import {acquisitionFrom} from "./measured.ts";
import {wantedFrom} from "./wanted.ts";

/**
 * @param maps GeoJSON files by their paths; undefined: what they would add is left out
 * @param ties of the files that --tie names
 * @throws {InputError} `option/missing` without an observable; `option/…`, `unit/…`, `observable/unknown`, `support/…`, `bound/…`
 */
export function settingsFrom(asked: Asked, maps?: MapFiles, ties?: readonly Tie[]): Settings {
  const observable = observableAsked(asked);
  if (observable === undefined)
    throw new InputError(
      "option/missing",
      `--observable is missing: nothing says what the values are. Give one of ${OBSERVABLES.map(({name}) => name).join(", ")}, for example --observable ${OBSERVABLES[0]!.name}.`,
    );
  return {
    acquisition: acquisitionFrom(asked, maps),
    fieldDirection: fieldDirectionFrom(asked),
    model: modelFrom(asked, maps, ties),
    bound: boundFrom(asked, observableNamed(observable)),
    wanted: wantedFrom(asked, maps),
    processing: oneOf(asked, "processing"),
  };
}
