/** The settings in force in short, for the head of a page; record.json holds them all. */
import {observableNamed} from "../potential/catalogue.ts";
import {DELIVERY_UNIT} from "../quantities.ts";
import type {Settings} from "../study/settings.ts";
import type {Survey} from "../survey/survey.ts";
import {messageText, nameText} from "./html.ts";
import {levelWords} from "./level-words.ts";
import {exactText, metreText, percentText} from "./number-text.ts";

const DEGREES = {
  "-1": "none",
  "0": "a constant, estimated with the source",
  "1": "a straight line, estimated with the source",
  "2": "a parabola, estimated with the source",
  "3": "a cubic, estimated with the source",
} as const;

/** Pairs of a definition list; markup, escaped. */
export function settingsPairs(settings: Settings, survey: Survey): readonly (readonly [string, string])[] {
  const {acquisition, model, wanted} = settings;
  const pairs: [string, string][] = [["Files", survey.files.map(nameText).join(", ")]];
  const length = acquisition.noiseLength ?? 0;
  for (const channel of acquisition.channels)
    pairs.push([
      acquisition.channels.length > 1 ? `Readings, ${nameText(channel.role)}` : "Readings",
      readingsText(channel, survey, length),
    ]);
  if (survey.delivered !== undefined) pairs.push(["Coordinates", nameText(survey.delivered)]);
  pairs.push(["Chainage", survey.axes.map(axisText).join("; ")]);
  if (model.boundary !== undefined)
    pairs.push([
      "Boundary",
      model.boundary.kind === "elevation"
        ? `flat, at elevation ${metreText(model.boundary.elevation)} m`
        : model.boundary.kind === "ground"
          ? `following the ground, ${metreText(model.boundary.depth)} m below it`
          : `flat, ${metreText(model.boundary.depth)} m below the lowest ground under the line`,
    ]);
  pairs.push([
    "Support",
    model.support.length === 0
      ? "the line and five median heights on either side"
      : model.support
          .map((zone) =>
            "area" in zone
              ? nameText(zone.area.words)
              : `${zone.group === undefined ? "" : `${nameText(zone.group)}: `}${metreText(zone.from)} to ${metreText(zone.to)} m`,
          )
          .join("; "),
  ]);
  if (model.ties !== undefined) pairs.push(["Ties", `${model.ties.length} known readings`]);
  if (model.strike !== undefined)
    pairs.push(["Strike of the sources", `azimuth ${exactText(model.strike)}°; distances are scaled to square to it`]);
  pairs.push(["Bound", nameText(settings.bound.text)]);
  pairs.push(["Regional", DEGREES[`${model.regional}`]]);
  pairs.push(["Levels", wanted.levels.map(levelWords).join("; ")]);
  const percent = percentText(wanted.confidence);
  pairs.push([
    "Intervals",
    wanted.intervals === "simultaneous"
      ? `simultaneous band: holds for all numbers of the line at once at ${percent}`
      : percent,
  ]);
  pairs.push([
    "Done before",
    settings.processing === undefined ? "nothing was stated" : messageText(settings.processing),
  ]);
  return pairs;
}

function readingsText(
  {role, observable, unit, noise}: Settings["acquisition"]["channels"][number],
  {choices}: Survey,
  length: number,
): string {
  const own = DELIVERY_UNIT[observableNamed(observable).dimension].symbol;
  const named = nameText(unit ?? choices.find((choice) => choice.role === role)?.unit ?? own);
  const told =
    noise === "record" || noise === undefined
      ? "noise from the fourth differences of the record"
      : `noise ${exactText(noise)} ${named} given`;
  const correlated = length > 0 ? `, correlated over ${metreText(length)} m along the line` : "";
  return `${nameText(observable)}, in ${named}; ${told}${correlated}`;
}

const axisText = ({group, azimuth, lines}: Survey["axes"][number]): string =>
  azimuth === undefined
    ? `${nameText(group)}: as given, ${lines} lines`
    : `${nameText(group)}: along azimuth ${azimuth.toFixed(1)}°, ${lines} lines`;

export const definitionList = (pairs: readonly (readonly [string, string])[]): string =>
  `<dl>${pairs.map(([term, text]) => `<dt>${term}</dt><dd>${text}</dd>`).join("")}</dl>`;
