/** Heights above the boundary and one noise level: the line made ready for the operator. */
import {InputError, ModelError} from "../errors.ts";
import {type BoundaryLine, boundaryAt} from "../geometry/boundary-line.ts";
import {doubt, type Notice, remark, standingDoubt} from "../notice.ts";
import type {EffectiveDirection} from "../potential/effective-direction.ts";
import type {BoundarySetting} from "./boundary.ts";
import {byChainage} from "./by-chainage.ts";
import type {ConditionedChannel, ConditionedLine} from "./conditioned.ts";
import type {Channel, SurveyLine} from "./line.ts";
import {recordNoise, spacingOf} from "./record-noise.ts";

/**
 * @param boundary undefined: the ground, where that is a boundary at all
 * @param direction of the Earth's field along the line, where an observable needs it
 * @throws {InputError} `boundary/…` when the heights at hand do not place the boundary, `noise/…`, `direction/not-given`
 * @throws {ModelError} `boundary/station-below` when a sensor lies on or below it
 */
export function condition(
  line: SurveyLine,
  boundary: BoundarySetting | undefined,
  direction?: EffectiveDirection,
): ConditionedLine {
  if (line.channels.length === 0) throw new InputError("line/no-channel", `Line ${line.id} holds no readings.`);
  const notices: Notice[] = [];
  const placed = placeBoundary(line, boundary, notices);
  const {chainage} = line.stations;
  const channels = line.channels.map((channel): ConditionedChannel => {
    const z = channel.above === undefined ? placed.z : placed.z.map((height, i) => height + channel.above![i]);
    z.forEach((height, i) => {
      const above = height - boundaryAt(placed.boundaryLine, chainage[i]);
      if (!(above > 0))
        throw new ModelError(
          "boundary/station-below",
          `The station in row ${line.stations.row[i]} of line ${line.id} lies ${below(above)} the boundary (${placed.words}); every station must lie above it. Lower the boundary with --boundary, or correct the heights.`,
          {place: {file: line.file, row: line.stations.row[i]}},
        );
    });
    const {observable} = channel;
    if (observable.needsDirection && direction === undefined)
      throw new InputError(
        "direction/not-given",
        `${observable.name} needs the direction of the Earth's field. Give --inclination and --declination, or --date.`,
      );
    return {
      channel,
      response: observable.response(direction),
      z,
      noise: noiseOf(line, channel, notices),
      noiseFrom: channel.noise === "record" ? "record" : "given",
      noiseLength: channel.noiseLength ?? 0,
    };
  });
  return {
    line,
    height: channels[0].z.map((z, i) => z - boundaryAt(placed.boundaryLine, chainage[i])),
    boundaryLine: placed.boundaryLine,
    datum: placed.datum,
    groundHeight: placed.groundHeight,
    boundary: placed.words,
    channels,
    direction,
    notices,
  };
}

function noiseOf(line: SurveyLine, channel: Channel, notices: Notice[]): number {
  let {noise} = channel;
  const length = channel.noiseLength ?? 0;
  if (length > 0) checkApart(line, channel);
  if (noise === "record") {
    const record = recordNoise(line.stations.chainage, channel.values, length);
    noise = record.sigma;
    if (!record.white)
      notices.push(
        doubt(
          "noise/record-not-white",
          length > 0
            ? `The noise was taken from the fourth differences of the record, and these are not those of noise correlated over ${length} m: signal leaks into them or the length is wrong. Give --noise.`
            : "The noise was taken from the fourth differences of the record, and these are not those of white noise: signal leaks into them or the noise is correlated. Give --noise, or --noise-length with it.",
        ),
      );
  }
  if (!(noise > 0))
    throw new InputError(
      "noise/not-positive",
      `The noise of line ${line.id} is ${noise}; it is a standard deviation and must be above zero. Give --noise.`,
    );
  return noise;
}

/** Stations nearer than this, in units of the spacing, stand at one place. */
const SAME_PLACE = 1e-6;

/** Two readings at one place would have one and the same noise, so that no source could make them differ. */
function checkApart({id, file, stations}: SurveyLine, {role}: Channel): void {
  const {chainage, row} = stations;
  const least = SAME_PLACE * spacingOf(chainage);
  const order = byChainage(chainage);
  for (let k = 1; k < order.length; ++k) {
    const [i, j] = [order[k - 1]!, order[k]!];
    if (chainage[j]! - chainage[i]! > least) continue;
    throw new InputError(
      "noise/same-place",
      `Rows ${row[i]} and ${row[j]} of line ${id} both stand at chainage ${chainage[j]} m. Noise that is correlated along the line would be the same for both readings of ${role}, and they could not differ. Leave one out or take their mean, or leave --noise-length out.`,
      {place: {file, row: row[j]!}},
    );
  }
}

interface PlacedBoundary {
  /** Sensor above the datum of the section. */
  readonly z: Float64Array;
  readonly boundaryLine: BoundaryLine | undefined;
  readonly datum: number;
  readonly groundHeight: Float64Array | undefined;
  readonly words: string;
}

function placeBoundary(line: SurveyLine, setting: BoundarySetting | undefined, notices: Notice[]): PlacedBoundary {
  const {elevation, clearance, ground} = line.stations;
  const above = (level: number, words: string): PlacedBoundary => {
    const ofGround = ground?.map((g) => g - level);
    if (ofGround?.some((g) => g > 0))
      notices.push(
        remark(
          "boundary/below-ground",
          "The boundary lies below the ground in places: the result holds only if nothing between them is a source.",
        ),
      );
    return {z: elevation!.map((z) => z - level), boundaryLine: undefined, datum: level, groundHeight: ofGround, words};
  };
  const flatGround = (depth: number): PlacedBoundary => {
    notices.push(
      standingDoubt(
        "boundary/ground-taken-as-flat",
        `Only the clearance is known, so the ground under the line was taken as flat${depth > 0 ? `, with the boundary ${depth} m below it` : " and as the boundary"}. If it is not, survey lines with elevation and ground columns say where it lies.`,
      ),
    );
    return {
      z: clearance!.map((c) => c + depth),
      boundaryLine: undefined,
      datum: -depth,
      groundHeight: new Float64Array(clearance!.length).fill(depth),
      words: depth > 0 ? `${depth} m below ground taken as flat` : "the ground, taken as flat",
    };
  };
  const lowest = (values: Float64Array): number => values.reduce((least, value) => Math.min(least, value), Infinity);
  const highest = (values: Float64Array): number => values.reduce((most, value) => Math.max(most, value), -Infinity);

  if (setting?.kind === "ground") {
    const {depth} = setting;
    if (elevation === undefined || ground === undefined)
      throw new InputError(
        "boundary/no-ground",
        `--boundary ground-${depth} follows the ground, but line ${line.id} does not give both the sensor's elevation and the ground. Give a ground column, or a clearance beside the elevation.`,
      );
    const level = lowest(ground) - depth;
    return {
      z: elevation.map((z) => z - level),
      datum: level,
      boundaryLine: boundaryUnder(
        line.stations.chainage,
        ground.map((g) => g - depth - level),
      ),
      groundHeight: new Float64Array(ground.length).fill(depth),
      words: `${depth} m below the ground, following it`,
    };
  }
  if (setting?.kind === "elevation") {
    if (elevation === undefined)
      throw new InputError(
        "boundary/no-elevation",
        `--boundary ${setting.elevation} is an elevation, but line ${line.id} gives the clearance only. Give an elevation column or --elevation, or --boundary depth-D for a boundary D metres below ground.`,
      );
    return above(setting.elevation, `flat at elevation ${setting.elevation} m`);
  }
  if (setting?.kind === "depth") {
    if (elevation !== undefined && ground !== undefined) {
      const level = lowest(ground) - setting.depth;
      return above(level, `flat at elevation ${level} m, ${setting.depth} m below the lowest ground`);
    }
    if (clearance !== undefined) return flatGround(setting.depth);
    throw new InputError(
      "boundary/no-ground",
      `--boundary depth-${setting.depth} needs the ground, but line ${line.id} gives the sensor's elevation only. Give a ground column, a clearance, or --boundary Z as an elevation.`,
    );
  }
  if (elevation !== undefined && ground !== undefined && clearance !== undefined) {
    const relief = highest(ground) - lowest(ground);
    const least = lowest(clearance);
    if (!(relief <= 0.1 * least))
      throw new InputError(
        "boundary/ground-not-flat",
        `The ground under line ${line.id} rises and falls by ${relief.toPrecision(3)} m, more than a tenth of the least clearance (${least.toPrecision(3)} m). Say where the boundary lies: --boundary Z or --boundary depth-D.`,
      );
    return above(lowest(ground), `flat at the lowest ground, elevation ${lowest(ground)} m`);
  }
  if (clearance !== undefined) return flatGround(0);
  throw new InputError(
    "boundary/not-given",
    `Line ${line.id} gives the sensor's elevation but neither ground nor clearance. Say where the boundary lies: --boundary Z.`,
  );
}

/** The broken line through the heights at the stations, in increasing chainage; stations at one chainage give their mean. */
function boundaryUnder(chainage: Float64Array, heights: Float64Array): BoundaryLine {
  const order = Int32Array.from(chainage.keys()).sort((i, j) => chainage[i] - chainage[j]);
  const x: number[] = [];
  const y: number[] = [];
  let shared = 0;
  for (const i of order) {
    if (x.length > 0 && chainage[i] - x[x.length - 1] <= 1e-6) {
      ++shared;
      y[y.length - 1] += (heights[i] - y[y.length - 1]) / (shared + 1);
    } else {
      shared = 0;
      x.push(chainage[i]);
      y.push(heights[i]);
    }
  }
  return {x: Float64Array.from(x), y: Float64Array.from(y)};
}

/** How far above or below; a height that is not a number is told as it is. */
const below = (above: number): string =>
  above === 0 ? "on" : above < 0 ? `${(-above).toPrecision(4)} m below` : `${above} m above`;
