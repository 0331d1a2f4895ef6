/** All about one line: strips, doubts, the figure, why this multiplier, what the intervals rest on. */
import {DELIVERY_UNIT} from "../quantities.ts";
import type {ChannelNoises} from "../study/noises.ts";
import type {LineStudy} from "../study/outcome.ts";
import type {ConditionedChannel} from "../survey/conditioned.ts";
import {boundsTable} from "./bounds-table.ts";
import {comparisonTable} from "./comparison-table.ts";
import {deliveryOf} from "./delivery.ts";
import {kernelsFigure} from "./figures/kernels.ts";
import {LEVELS_SHOWN, profileFigure} from "./figures/profile.ts";
import {tradeoffFigure} from "./figures/tradeoff.ts";
import {escaped, messageText, nameText} from "./html.ts";
import {INTERVAL_BASIS} from "./interval-basis.ts";
import {jointPromise} from "./interval-words.ts";
import {stateText} from "./line-table.ts";
import {counted, countText, figureText, fixedText, metreText, percentText} from "./number-text.ts";
import {levelSentence, resolutionSentence, trustSentence} from "./reach-words.ts";
import {definitionList} from "./settings-text.ts";
import {stripRows, stripTable} from "./strip-table.ts";

/** @param index of the line in the survey, from 0 */
export function lineSection(study: LineStudy, status: "done" | "doubtful", index: number): string {
  const {line, conditioned, confidence} = study;
  const delivery = deliveryOf(study.observable);
  const doubts = study.notices.filter((notice) => notice.weight === "doubt");
  const remarks = study.notices.filter((notice) => notice.weight === "remark");
  const items = [...doubts, ...remarks].map(
    (notice) => `<li class="${notice.weight}">${messageText(notice.message)}</li>`,
  );
  const omitted =
    line.omitted > 0 ? ` ${counted(line.omitted, "row")} of the file left out for want of a reading or a height.` : "";
  return [
    `<section class="line" id="line-${index + 1}"><h2>Line ${nameText(line.id)} ${stateText(status)}</h2>`,
    `<p>${counted(line.stations.count, "station")}, sensor ${rangeText(conditioned.height)} m above the boundary (${messageText(conditioned.boundary)}).${omitted}</p>`,
    items.length > 0 ? `<ul class="plain">${items.join("")}</ul>` : "",
    stripTable(stripRows(study), delivery, confidence, false, study.intervals),
    boundsTable(study),
    `<figure>${profileFigure(study)}<figcaption>${caption(study)}</figcaption></figure>`,
    reach(study),
    `<div class="pair"><figure>${tradeoffFigure(study)}</figure>${grounds(study)}</div>`,
    comparisonTable(study),
    "</section>\n",
  ].join("");
}

function caption(study: LineStudy): string {
  const parts = [`${resolutionSentence(study)} Do not read narrower ones into the thin line.`];
  const {chainage} = study.line.stations;
  const [from, to] = [least(chainage), greatest(chainage)];
  if (study.panels.from[0]! < from || study.panels.to[study.panels.count - 1]! > to)
    parts.push("Grey flanks: support with no station above; there the interval may run beyond the frame.");
  if (study.strips.length > 0) parts.push("Shaded spans: strips asked about.");
  if (study.levels.length > LEVELS_SHOWN)
    parts.push(`${counted(study.levels.length - LEVELS_SHOWN, "further level")} in levels.csv.`);
  return parts.join(" ");
}

/** What the data resolve, and down to where. */
function reach(study: LineStudy): string {
  const sentences = [...study.levels.map((level) => levelSentence(level, study)), trustSentence(study.trust)];
  const figure = kernelsFigure(study);
  const items = sentences.map((sentence) => `<li>${escaped(sentence)}</li>`).join("");
  return `${figure === "" ? "" : `<figure>${figure}<figcaption>Grey: a box of the kernel's height and unit area; its width is the resolution there.</figcaption></figure>`}<ul class="plain">${items}</ul>`;
}

function grounds(study: LineStudy): string {
  const {choice, estimate, conditioned, observable, resolution, gain} = study;
  const delivery = deliveryOf(observable);
  const basis = INTERVAL_BASIS[choice.basis];
  const several = conditioned.channels.length > 1;
  const ofChannel = ({channel}: ConditionedChannel): string => (several ? `${nameText(channel.role)}: ` : "");
  const readings = estimate.readings;
  return `<div>${definitionList([
    ["Multiplier", figureText(delivery.toMultiplier(choice.multiplier))],
    ["Chosen by", `${nameText(choice.rule)}: ${messageText(choice.reason)}`],
    [
      "Misfit",
      `${figureText(estimate.misfit)} for ${counted(readings, "reading")}, ${fixedText(estimate.misfit / readings, 2)} each`,
    ],
    ["Noise", conditioned.channels.map((heard) => `${ofChannel(heard)}${noiseWords(heard)}`).join("; ")],
    [
      "Noise by each way",
      study.noises
        .map((noises, k) => `${ofChannel(conditioned.channels[k]!)}${noisesWords(noises, conditioned.channels[k]!)}`)
        .join("; "),
    ],
    ...(conditioned.direction === undefined
      ? []
      : [
          [
            "Earth's field along the line",
            `effective inclination ${fixedText(conditioned.direction.inclination, 1)}°, β = ${fixedText(conditioned.direction.beta, 3)}`,
          ] as const,
        ]),
    ["Degrees of freedom", `${figureText(estimate.degreesOfFreedom)} used of ${countText(readings)}`],
    [
      "Resolution",
      gain === undefined
        ? `${metreText(resolution.length)} m`
        : `${metreText(resolution.length)} m with ${gain.further.map(nameText).join(" and ")}, ${Number.isFinite(gain.without) ? `${metreText(gain.without)} m` : "none"} without`,
    ],
    ["Norm of the source", `${figureText(delivery.toNorm(estimate.norm))} ${delivery.field}·√m`],
    ["Bound", `${figureText(delivery.toNorm(choice.bound))} ${delivery.field}·√m, ${boundWords(choice)}`],
  ])}<p class="small">${jointPromise(study.intervals, percentText(study.confidence))}<b>${basis.lead}</b> ${messageText(basis.text)}</p></div>`;
}

function noiseWords({channel, noise, noiseFrom, noiseLength}: ConditionedChannel): string {
  const {factor, symbol} = DELIVERY_UNIT[channel.observable.dimension];
  const correlated = noiseLength > 0 ? `, correlated over ${metreText(noiseLength)} m along the line` : "";
  return `${figureText(noise / factor)} ${symbol}, ${noiseFrom === "given" ? "as given" : "from the record"}${correlated}`;
}

/** Three estimates. */
function noisesWords({given, record, spectrum, flat}: ChannelNoises, {channel}: ConditionedChannel): string {
  const {factor, symbol} = DELIVERY_UNIT[channel.observable.dimension];
  const figure = (si: number): string => figureText(si / factor);
  const parts = [
    `given ${given === undefined ? "none" : figure(given)}`,
    `from the record ${record === undefined ? "not to be had" : figure(record)}`,
    `from the shortest waves of the residual ${spectrum === undefined ? "not to be had" : `${figure(spectrum)}, whose spectrum is ${flat ? "" : "not "}flat there`}`,
  ];
  return `${parts.join("; ")} (${symbol})`;
}

const boundWords = ({basis, active}: LineStudy["choice"]): string => {
  if (basis === "assumed-bound") return "assumed for the intervals, since none was given";
  return active ? "holds the estimate back" : "does not hold the estimate back";
};

const least = (values: Float64Array): number => values.reduce((a, b) => Math.min(a, b), Number.POSITIVE_INFINITY);
const greatest = (values: Float64Array): number => values.reduce((a, b) => Math.max(a, b), Number.NEGATIVE_INFINITY);

function rangeText(values: Float64Array): string {
  const a = metreText(least(values));
  const b = metreText(greatest(values));
  return a === b ? a : `${a} to ${b}`;
}
