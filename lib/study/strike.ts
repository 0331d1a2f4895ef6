/**
 * Sources that do not run square to the line. Along a line at an angle φ to their strike they are crossed over
 * distances 1/|sin φ| times those square to it; so a study is made on chainage times |sin φ|, where the sources are
 * square to the axis again, and its answers are put back on the line's own chainage. Exact for sources that run on
 * along the strike for ever; the smaller φ, the farther they must.
 */
import {InputError, ModelError, ReportableError} from "../errors.ts";
import type {BoundaryLine} from "../geometry/boundary-line.ts";
import type {Support} from "../geometry/interval.ts";
import {totalLength} from "../geometry/interval.ts";
import {trackDirection} from "../geometry/track-direction.ts";
import {partsOf, type RuleAnswer, type Strip} from "../inverse/nouns.ts";
import type {Notice} from "../notice.ts";
import {lazily, replacing} from "../numeric/lazily.ts";
import type {Panels} from "../operators/panels.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {LineStudy} from "./outcome.ts";
import type {Settings} from "./settings.ts";
import type {LineZones} from "./zones.ts";

/** Degrees. A body seen at 30° is twice as long on the line as it is wide, and its ends come twice as near. A heuristic. */
const LEAST_ANGLE = 30;

export interface Crossing {
  /** |sin| of the angle between line and strike, in (0, 1]. */
  readonly scale: number;
  /** Of the angle, degrees in [30, 90]. */
  readonly angle: number;
  /** Square to the strike, on the side of increasing chainage; degrees clockwise from true north. */
  readonly azimuth: number;
}

/**
 * @returns undefined where no strike was given: sources run square to the line
 * @throws {InputError} `strike/no-azimuth`, `strike/along-component`
 * @throws {ModelError} `strike/too-oblique`
 */
export function crossingOf(line: SurveyLine, {model, wanted}: Settings): Crossing | undefined {
  const {strike} = model;
  if (strike === undefined) return undefined;
  if (line.track === undefined)
    throw new InputError(
      "strike/no-azimuth",
      `--strike needs the azimuth of line ${line.id}, and only its chainage is known. Give the columns of its coordinates and --crs.`,
      {place: {file: line.file}},
    );
  if ((model.ties ?? []).length > 0)
    throw new InputError(
      "strike/ties",
      "--tie and --strike do not go together yet: a tie lies on the line, not on the section square to the strike. Leave one of them out.",
    );
  const names = [...line.channels.map(({observable}) => observable.name), wanted.levelQuantity?.name ?? ""];
  const along = names.find((name) => name.includes("-along"));
  if (along !== undefined)
    throw new InputError(
      "strike/along-component",
      `${along} is a component along the line, and with --strike the theory has one square to the strike. Leave --strike out, or use other components.`,
    );
  const {azimuth} = trackDirection(line.track);
  const turn = Math.sin(((strike - azimuth) * Math.PI) / 180);
  const scale = Math.abs(turn);
  const angle = (Math.asin(scale) * 180) / Math.PI;
  if (!(angle >= LEAST_ANGLE - 1e-9))
    throw new ModelError(
      "strike/too-oblique",
      `Line ${line.id} (azimuth ${azimuth.toFixed(1)}°) crosses the strike ${strike}° at ${angle.toFixed(1)}°, and at least ${LEAST_ANGLE}° are needed: that sources run on unchanged along their strike is assumed over a length that grows without limit as the line turns into it. Use lines that cross the strike, or correct --strike.`,
      {place: {file: line.file}},
    );
  return {scale, angle, azimuth: (strike + (turn < 0 ? 90 : 270)) % 360};
}

/** Messages that name a length of the noise. */
const NOISE_LENGTH = /--noise-length \d|correlated over/;

/** Line, settings and zones on chainage times `scale`, across the strike; `own` leads from strips there to those here. */
export function squareToStrike(line: SurveyLine, settings: Settings, zones: LineZones, scale: number) {
  const own = new Map<Strip, Strip>();
  const across = (strip: Strip): Strip => {
    const {parts, from, to} = strip;
    const scaled = {...strip, from: from * scale, to: to * scale};
    const made = parts === undefined ? scaled : {...scaled, parts: times(parts, scale)};
    own.set(made, strip);
    return made;
  };
  const {model, wanted} = settings;
  const {stations} = line;
  // Noise is correlated along the line as it was flown.
  const channels = line.channels.map((channel) => ({...channel, noiseLength: (channel.noiseLength ?? 0) * scale}));
  const scaledLine = {
    ...line,
    stations: {...stations, chainage: stations.chainage.map((x) => x * scale)},
    channels,
  };
  const scaledSettings: Settings = {
    ...settings,
    model: {
      ...model,
      support: model.support.map((zone) =>
        "area" in zone ? zone : {...zone, from: zone.from * scale, to: zone.to * scale},
      ),
      panel: model.panel === undefined ? undefined : model.panel * scale,
    },
    wanted: {...wanted, strips: wanted.strips.map((strip) => ("area" in strip ? strip : across(strip)))},
  };
  const scaledZones: LineZones = {
    ...zones,
    support: zones.support === undefined ? undefined : times(zones.support, scale),
    strips: zones.strips.map(across),
  };
  return {own, scaledLine, scaledSettings, scaledZones};
}

/** @param study makes the study of a line, with settings and zones, on chainage across the strike */
export function acrossStrike(
  line: SurveyLine,
  settings: Settings,
  zones: LineZones,
  {scale, angle}: Crossing,
  study: (line: SurveyLine, settings: Settings, zones: LineZones) => LineStudy,
): LineStudy {
  const {own, scaledLine, scaledSettings, scaledZones} = squareToStrike(line, settings, zones, scale);
  const words = `Lengths here are square to the strike: ${scale.toPrecision(4)} of those along the line, which crosses it at ${angle.toFixed(1)}°.`;
  const explained = <N extends {readonly code: string; readonly message: string}>(told: N): N =>
    /^(support|strip|bound|channels|resolution)\//.test(told.code) || NOISE_LENGTH.test(told.message)
      ? {...told, message: `${told.message} ${words}`}
      : told;
  let found: LineStudy;
  try {
    found = study(scaledLine, scaledSettings, scaledZones);
  } catch (error) {
    if (!(error instanceof ReportableError)) throw error;
    const {code, message} = explained({code: error.code, message: error.message});
    const options = {place: error.place, cause: error};
    if (error instanceof InputError) throw new InputError(code, message, options);
    if (error instanceof ModelError) throw new ModelError(code, message, options);
    throw error;
  }
  const back = (lengths: Float64Array): Float64Array => lengths.map((length) => length / scale);
  const {conditioned, resolution, gain, averages, noises, comparison} = found;
  const answerBack = ({figures, ...told}: RuleAnswer): RuleAnswer => {
    if (figures === undefined) return told;
    const strips = figures.strips.map((mean) => ({...mean, strip: own.get(mean.strip)!}));
    return {...told, figures: {...figures, resolution: figures.resolution / scale, strips}};
  };
  const kernels = lazily(() =>
    found.kernels.map(({at, width, chainage, value}) => ({
      at: at / scale,
      width: width / scale,
      chainage: back(chainage),
      value: value.map((height) => height * scale),
    })),
  );
  return replacing<LineStudy>(found, {
    line,
    conditioned: {
      ...conditioned,
      line,
      boundaryLine: boundaryTimes(conditioned.boundaryLine, 1 / scale),
      channels: conditioned.channels.map((heard, k) => ({
        ...heard,
        channel: line.channels[k]!,
        noiseLength: line.channels[k]!.noiseLength ?? 0,
      })),
    },
    panels: panelsTimes(found.panels, 1 / scale),
    resolution: {
      length: resolution.length / scale,
      local: back(resolution.local),
      worst: {length: resolution.worst.length / scale, at: resolution.worst.at / scale},
    },
    get kernels() {
      return kernels();
    },
    ...(comparison === undefined ? {} : {comparison: comparison.map(answerBack)}),
    gain: gain === undefined ? undefined : {...gain, without: gain.without / scale},
    noises: noises.map((one) => (one.length === undefined ? one : {...one, length: one.length / scale})),
    averages: {...averages, averagedOver: back(averages.averagedOver)},
    levels: found.levels.map((level) => ({...level, averagedOver: back(level.averagedOver)})),
    strips: found.strips.map((estimate) => ({
      ...estimate,
      strip: own.get(estimate.strip)!,
      across: totalLength(partsOf(estimate.strip)),
    })),
    notices: found.notices.map((notice): Notice => explained(notice)),
  });
}

const times = (support: Support, factor: number): Support =>
  support.map(({from, to}) => ({from: from * factor, to: to * factor}));

const boundaryTimes = (boundary: BoundaryLine | undefined, factor: number): BoundaryLine | undefined =>
  boundary === undefined ? undefined : {...boundary, x: boundary.x.map((x) => x * factor)};

function panelsTimes(panels: Panels, factor: number): Panels {
  const all = (values: Float64Array): Float64Array => values.map((value) => value * factor);
  return {
    ...panels,
    from: all(panels.from),
    to: all(panels.to),
    centre: all(panels.centre),
    width: all(panels.width),
    boundary: boundaryTimes(panels.boundary, factor),
    components: panels.components.map((part) => ({
      ...part,
      interval: {from: part.interval.from * factor, to: part.interval.to * factor},
      edges: all(part.edges),
    })),
  };
}
