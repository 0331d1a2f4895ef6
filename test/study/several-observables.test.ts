/** The walk of lines with several channels, with other observables, and over ground that rises and falls. */
import {describe, expect, test} from "vitest";
import {coordinateSystem} from "../../lib/geometry/coordinate-system.ts";
import type {Track} from "../../lib/geometry/track.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {observableNamed} from "../../lib/potential/catalogue.ts";
import {effectiveDirection} from "../../lib/potential/effective-direction.ts";
import {fieldAlong} from "../../lib/potential/field-along.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {gravity} from "../../lib/potential/gravity.ts";
import {gravityGradient} from "../../lib/potential/gravity-gradient.ts";
import {amplitudeIm, amplitudeRe, kernelOverPiece, type Response} from "../../lib/potential/kernel.ts";
import {levelQuantityNamed} from "../../lib/potential/level-quantity.ts";
import type {Observable} from "../../lib/potential/observable.ts";
import {totalFieldAnomaly} from "../../lib/potential/total-field-anomaly.ts";
import {effectiveDirectionOf} from "../../lib/study/direction-of-line.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {LineStudy} from "../../lib/study/outcome.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

const level = (height: number) => ({kind: "above-boundary", height}) as const;
const strip = (name: string, from: number, to: number) => ({name, from, to, group: undefined});

/** Density 1 on 90:130 and −0.4 on 150:160 of a boundary, times `strength`. */
const PARTS = [
  {from: 90, to: 130, f: 1},
  {from: 150, to: 160, f: -0.4},
] as const;
const chainage = evenly(0, 240, 81);
const flatGround = (): number => 0;

/** What a sensor at (x, z) reads of them where the boundary has heights `y`, by 0.25 m pieces. */
function reading(response: Response, x: number, z: number, y: (x: number) => number): number {
  let sum = 0;
  for (const {from, to, f} of PARTS)
    for (let a = from; a < to; a += 0.25) {
      const b = a + 0.25;
      sum +=
        f *
        kernelOverPiece(amplitudeRe(response), amplitudeIm(response), response.order, a - x, z - y(a), b - x, z - y(b));
    }
  return sum;
}

interface Made {
  readonly observables: readonly Observable[];
  readonly strength: number;
  /** Of the largest reading of each channel. */
  readonly noise?: number;
  readonly ground?: (x: number) => number;
  readonly clearance?: (x: number) => number;
  readonly azimuth?: number;
  readonly inclination?: number;
  readonly declination?: number;
  /** The boundary lies so far below the ground, m. */
  readonly depth?: number;
}

/** A line with ground and elevation, on a map whose north is true, read by the given sensors. */
function madeLine(made: Made): SurveyLine {
  const {observables, strength, noise = 1e-3, ground = flatGround, clearance = () => 8, azimuth = 35} = made;
  const {inclination = 62, declination = 3, depth = 0} = made;
  const direction = effectiveDirection(inclination, declination, azimuth);
  const elevation = chainage.map((x) => 300 + ground(x) + clearance(x));
  const base = syntheticLine({chainage, clearance: chainage.map(clearance), values: chainage, noise: 1});
  const [sin, cos] = [Math.sin((azimuth * Math.PI) / 180), Math.cos((azimuth * Math.PI) / 180)];
  const track: Track = {
    system: undefined,
    chainage: Float64Array.of(0, 240),
    x: Float64Array.of(5000, 5000 + 240 * sin),
    y: Float64Array.of(7000, 7000 + 240 * cos),
    beyond: [sin, cos],
  };
  return {
    ...base,
    stations: {...base.stations, elevation, ground: chainage.map((x) => 300 + ground(x))},
    track,
    channels: observables.map((observable, k) => {
      const response = observable.response(direction);
      const clean = chainage.map(
        (x) => strength * reading(response, x, ground(x) + clearance(x), (t) => ground(t) - depth),
      );
      const sigma = noise * clean.reduce((most, v) => Math.max(most, Math.abs(v)), 0);
      return {
        role: k === 0 ? "value" : `value.${k + 1}`,
        observable,
        values: withNoise(clean, sigma, 21 + k),
        noise: sigma,
      };
    }),
  };
}

const angles = {kind: "angles", inclination: 62, declination: 3} as const;
const NANOTESLA = 1e-9;
/** ‖f‖² = 40 + 1.6 of the density above; M 10 % beyond it. */
const bound = (strength: number) => boundRuleNamed(`norm:${1.1 * Math.sqrt(41.6) * strength}`, 1);

/** Every answer of a study, by what it is. */
const answersOf = (study: LineStudy): ReadonlyMap<string, readonly number[]> =>
  new Map([
    ["density", [...study.estimate.density]],
    ["averages", [study.averages.value, study.averages.lower, study.averages.upper].flatMap((list) => [...list])],
    ["value", study.levels.flatMap(({value}) => [...value])],
    ["ends", study.levels.flatMap(({lower, upper}) => [...lower, ...upper])],
    ["strips", study.strips.flatMap(({mean, lower, upper}) => [mean, lower, upper])],
    ["plain", study.strips.map(({plainMean}) => plainMean)],
  ]);

function expectSame(
  got: ReturnType<typeof answersOf>,
  want: ReturnType<typeof answersOf>,
  scale: number,
  tolerance: number,
  because: string,
  kinds: readonly string[] = [...want.keys()],
): void {
  for (const kind of kinds) {
    const [one, other] = [got.get(kind)!, want.get(kind)!];
    expect(one.length).toBe(other.length);
    expect(one.length).toBeGreaterThan(0);
    one.forEach((value, i) => {
      absoluteClose(value / scale, other[i] / scale, tolerance, `${kind}: ${because}`);
    });
  }
}

describe("ground that is flat", () => {
  test.each([
    ["one channel", [gravity]],
    ["field and gradient", [gravity, gravityGradient]],
  ] as const)("gives what a flat boundary gives, followed or not: %s", (_, observables) => {
    const line = madeLine({observables, strength: 1e-5, depth: 2});
    const settings = plainSettings({
      levels: [level(1), level(6), {kind: "above-ground", height: 4}],
      strips: [strip("body", 90, 130), strip("over the end", 230, 300)],
      levelQuantity: levelQuantityNamed("gravity"),
    });
    const [flat, followed] = (["depth", "ground"] as const).map((kind) =>
      studyLine(line, {...settings, model: {...settings.model, boundary: {kind, depth: 2}}}),
    );
    expect(flat.conditioned.boundaryLine).toBeUndefined();
    expect(followed.conditioned.boundaryLine).toBeDefined();
    expectSame(answersOf(followed), answersOf(flat), 1e-5, 1e-9, "the promise", ["density", "value", "plain"]);
    // Both by 16 nodes on an element, but other elements: 6e-13 of the products of two fields, 3e-9 of two gradients,
    // over modes down to 1e-5/M². Of half-widths up to 6: 5e-8 and 2e-5.
    expectSame(answersOf(followed), answersOf(flat), 1e-5, observables.length === 1 ? 1e-6 : 2e-4, "as above");
  });

  test("at its own level has the density between panel centres, and no interval", () => {
    const line = madeLine({observables: [gravity], strength: 1e-5});
    const settings = plainSettings({bound: bound(1e-5), levels: [level(0)]});
    const [flat, followed] = (["depth", "ground"] as const).map((kind) =>
      studyLine(line, {...settings, model: {...settings.model, boundary: {kind, depth: 0}}}),
    );
    chainage.forEach((_, i) => {
      absoluteClose(followed.levels[0].value[i] / 1e-5, flat.levels[0].value[i] / 1e-5, 1e-9, "the promise");
      expect(flat.levels[0].upper[i]).toBeGreaterThan(flat.levels[0].lower[i]);
      expect(followed.levels[0].upper[i]).toBeNaN();
    });
  });
});

describe("over a hill 15 m high", () => {
  const hill = (x: number): number => 15 * Math.exp(-(((x - 105) / 30) ** 2));
  const clearance = (x: number): number => 8 + 2 * Math.sin(x / 13);
  const line = madeLine({observables: [gravity], strength: 1e-5, ground: hill, clearance});
  const settings = plainSettings({
    bound: bound(1e-5),
    levels: [
      {kind: "above-ground", height: 4},
      {kind: "above-ground", height: 0},
    ],
    strips: [strip("body", 92, 128), strip("beside", 40, 80)],
    regional: -1,
  });
  const follow = (kind: "ground" | "depth") =>
    studyLine(line, {...settings, model: {...settings.model, boundary: {kind, depth: 0}}});
  const study = follow("ground");

  test("a boundary that follows it brings the density back, inside its intervals", () => {
    const [body, beside] = study.strips;
    absoluteClose(body.mean / 1e-5, 1, 0.02, "noise of 0.1 %");
    absoluteClose(beside.mean / 1e-5, 0, 0.02, "noise of 0.1 %");
    for (const [{lower, upper}, truth] of [
      [body, 1],
      [beside, 0],
    ] as const) {
      expect(lower).toBeLessThan(truth * 1e-5);
      expect(upper).toBeGreaterThan(truth * 1e-5);
    }
    let outside = 0;
    study.averages.value.forEach((_, j) => {
      const {averagedOver, lower, upper} = study.averages;
      const centre = study.panels.centre[j];
      if (centre < 10 || centre > 230) return;
      const [from, to] = [centre - averagedOver[j] / 2, centre + averagedOver[j] / 2];
      const truth =
        (PARTS.reduce((sum, part) => sum + part.f * Math.max(0, Math.min(part.to, to) - Math.max(part.from, from)), 0) /
          averagedOver[j]) *
        1e-5;
      if (!(lower[j] < truth && truth < upper[j])) ++outside;
    });
    expect(outside).toBe(0);
    expect(study.estimate.misfit).toBeLessThan(81 + 4 * Math.sqrt(162));
  });

  test("levels over the ground lie in their intervals, and on it they are cos²θ of the density and more", () => {
    const [above, on] = study.levels;
    chainage.forEach((x, i) => {
      const truth = 1e-5 * reading({re: 1, im: 0, order: 0}, x, hill(x) + 4, hill);
      expect(above.lower[i]).toBeLessThan(truth);
      expect(above.upper[i]).toBeGreaterThan(truth);
      expect(on.value[i]).not.toBeNaN();
      // Inside the body, away from its edges, just over the ground: the field is that of the truth to some per cent.
      if (x < 97 || x > 123) return;
      const near = 1e-5 * reading({re: 1, im: 0, order: 0}, x, hill(x) + 0.5, hill);
      absoluteClose(on.value[i] / 1e-5, near / 1e-5, 0.2, "half a metre, and waves shorter than the height");
    });
  });

  test("a flat boundary at its foot, with sources up to 15 m above it, is found out: no source within the bound will do", () => {
    expect(() => follow("depth")).toThrowError(expect.objectContaining({code: "bound/infeasible", exitStatus: 3}));
  });
});

describe("field and gradient together", () => {
  test("narrow every interval against the field alone, and each channel is explained by itself", () => {
    const settings = plainSettings({
      boundary: {kind: "depth", depth: 0},
      levels: [level(2)],
      strips: [strip("body", 90, 130)],
      regional: 1,
    });
    const both = madeLine({observables: [gravity, gravityGradient], strength: 1e-5});
    const alone = {...both, channels: both.channels.slice(0, 1)};
    const [one, two] = [alone, both].map((line) => studyLine(line, settings));
    const width = ({levels: [{upper, lower}]}: LineStudy, i: number): number => upper[i] - lower[i];
    for (let i = 0; i < 81; ++i) expect(width(two, i)).toBeLessThan(width(one, i) * (1 + 1e-6));
    expect(width(two, 40) / width(one, 40)).toBeLessThan(0.9);
    expect(two.estimate.channels.length).toBe(2);
    expect(two.estimate.readings).toBe(162);
    two.estimate.channels.forEach(({field, regional, residual}, k) => {
      const {values, noise} = both.channels[k];
      let squares = 0;
      values.forEach((value, i) => {
        absoluteClose(
          (field[i] + regional[i] + residual[i]) / (noise as number),
          value / (noise as number),
          1e-8,
          "sum",
        );
        squares += (residual[i] / (noise as number)) ** 2;
      });
      // The rule's target is 1.22 a reading on the whole; gradients carry the short waves that it leaves.
      expect(squares / 81).toBeGreaterThan(0.5);
      expect(squares / 81).toBeLessThan(2.4);
    });
  });

  test("two sensors on one pole, each at its own height, are two channels of one field", () => {
    const base = madeLine({observables: [gravity, gravity], strength: 1e-5, noise: 1e-3});
    const clean = chainage.map((x) => 1e-5 * reading({re: 1, im: 0, order: 0}, x, 11, flatGround));
    const upper = {...base.channels[1], values: clean, above: new Float64Array(81).fill(3)};
    const settings = plainSettings({bound: bound(1e-5), boundary: {kind: "depth", depth: 0}, regional: -1});
    const study = studyLine({...base, channels: [base.channels[0], upper]}, settings);
    expect(study.conditioned.channels.map(({z}) => z[5])).toEqual([8, 11]);
    expect(study.estimate.misfit).toBeLessThan(162 + 4 * Math.sqrt(324));
    // Were it taken for a second reading at 8 m, no source would explain both.
    expect(() => studyLine({...base, channels: [base.channels[0], {...upper, above: undefined}]}, settings)).toThrow();
  });
});

describe("total field read", () => {
  const strength = 200 * NANOTESLA;
  const line = madeLine({observables: [totalFieldAnomaly], strength});
  const settings = (name: string, heights = [5, 20]) =>
    plainSettings({
      bound: bound(strength),
      boundary: {kind: "depth", depth: 0},
      fieldDirection: angles,
      levels: heights.map(level),
      levelQuantity: levelQuantityNamed(name),
      strips: [strip("body", 90, 130)],
      regional: -1,
    });

  test.each([
    "boundary-field",
    "field-vertical",
    "field-along",
    "total-field-anomaly",
    "field-vertical-gradient",
    "total-field-anomaly-gradient",
    "pole-reduced",
  ])("gives %s on levels, the truth in every interval", (name) => {
    const study = studyLine(line, settings(name));
    const direction = effectiveDirection(62, 3, 35);
    const responses = levelQuantityNamed(name).responses(direction);
    expect(responses.length).toBe(1);
    for (const {quantity, dimension, height, value, lower, upper} of study.levels) {
      expect(quantity).toBe(name);
      expect(dimension).toBe(name.endsWith("gradient") ? "field-gradient" : "field");
      const truth = chainage.map((x, i) => strength * reading(responses[0], x, height[i], flatGround));
      const size = truth.reduce((most, v) => Math.max(most, Math.abs(v)), 0);
      chainage.forEach((_, i) => {
        expect(lower[i]).toBeLessThan(truth[i]);
        expect(upper[i]).toBeGreaterThan(truth[i]);
        expect(value[i]).not.toBeNaN();
      });
      // The one source: as good as noise of 0.1 % allows, 20 m up; 5 m up it is below the sensor, and gradients are rougher.
      if (height[0] === 20)
        chainage.forEach((x, i) => {
          if (x > 60 && x < 180)
            absoluteClose(value[i] / size, truth[i] / size, 0.05, "noise of 0.1 %, bounded source");
        });
    }
    const [{lower, upper}] = study.strips;
    expect(lower).toBeLessThan(strength);
    expect(upper).toBeGreaterThan(strength);
  });

  test.each(["amplitude", "gradient-amplitude"])("gives %s without an interval", (name) => {
    const study = studyLine(line, settings(name, [20]));
    const responses = levelQuantityNamed(name).responses(undefined);
    const [{value, lower, upper}] = study.levels;
    chainage.forEach((x, i) => {
      const truth = Math.hypot(...responses.map((response) => strength * reading(response, x, 20, flatGround)));
      if (x > 60 && x < 180) absoluteClose(value[i] / truth, 1, 0.1, "noise of 0.1 %, bounded source");
      expect(lower[i]).toBeNaN();
      expect(upper[i]).toBeNaN();
    });
  });

  test("refuses what it cannot give: gravity, no direction, other than the downward component on the boundary", () => {
    const refused = (own: Parameters<typeof studyLine>[1], code: string) =>
      expect(() => studyLine(line, own)).toThrowError(expect.objectContaining({code}));
    refused(settings("gravity"), "level/wrong-observable");
    refused({...settings("field-vertical"), fieldDirection: undefined}, "direction/not-given");
    refused(settings("field-along", [0]), "level/on-boundary");
    const vertical = madeLine({observables: [fieldVertical], strength});
    expect(() => studyLine(vertical, {...settings("pole-reduced"), fieldDirection: undefined})).toThrowError(
      expect.objectContaining({code: "direction/not-given"}),
    );
    expect(studyLine(vertical, {...settings("field-along"), fieldDirection: undefined}).levels.length).toBe(2);
  });

  test("flown the other way, or on an axis that counts the other way, changes no answer", () => {
    const asked = settings("total-field-anomaly");
    const base = studyLine(line, asked);
    const flown = studyLine({...line, direction: -1}, asked);
    expect(answersOf(flown)).toEqual(answersOf(base));
    // Chainage from the other end: the azimuth turns by 180°, along changes sign, the total field does not.
    const turned: SurveyLine = {
      ...line,
      stations: {
        ...line.stations,
        chainage: chainage.map((x) => 240 - x),
        ground: line.stations.ground!,
      },
      track: {
        ...line.track!,
        x: line.track!.x.slice().reverse(),
        y: line.track!.y.slice().reverse(),
        beyond: [-line.track!.beyond[0], -line.track!.beyond[1]],
      },
    };
    const other = studyLine(turned, {
      ...asked,
      wanted: {...asked.wanted, strips: [strip("body", 110, 150)]},
    });
    const density = [...other.estimate.density].reverse();
    expect(density.length).toBe(base.estimate.density.length);
    density.forEach((f, j) => {
      // Multipliers are found to 1e-10, over modes down to 1e-13 of the largest.
      absoluteClose(f / strength, base.estimate.density[j] / strength, 1e-7, "rounding of weak modes");
    });
    other.levels.forEach(({value, lower, upper}, k) => {
      chainage.forEach((_, i) => {
        for (const [got, want] of [
          [value, base.levels[k].value],
          [lower, base.levels[k].lower],
          [upper, base.levels[k].upper],
        ])
          absoluteClose(got[i] / strength, want[i] / strength, 1e-7, "rounding");
      });
    });
    absoluteClose(other.strips[0].mean / strength, base.strips[0].mean / strength, 1e-7, "rounding");
  });
});

describe("the direction of a line", () => {
  const line = madeLine({observables: [totalFieldAnomaly, fieldAlong], strength: 1e-7});

  test("comes from its coordinates: the azimuth of increasing chainage", () => {
    const got = effectiveDirectionOf(line, plainSettings({fieldDirection: angles}))!;
    const want = effectiveDirection(62, 3, 35);
    absoluteClose(got.beta, want.beta, 1e-12, "rounding");
    absoluteClose(got.inclination, want.inclination, 1e-10, "rounding");
    expect(effectiveDirectionOf(line, plainSettings())).toBeUndefined();
  });

  test("counts azimuth from true north, and takes the field of its place on the day", () => {
    // 10 km due east of 9° E, 50° N, on the ellipsoid: azimuth 90° less half the turn of the meridians.
    const track: Track = {
      ...line.track!,
      system: coordinateSystem("EPSG:4326"),
      x: Float64Array.of(9, 9.14),
      y: Float64Array.of(50, 50),
    };
    const day = effectiveDirectionOf(
      {...line, track},
      plainSettings({fieldDirection: {kind: "date", date: "2025-07-01"}}),
    )!;
    // WMM2025 in mid-Europe: inclination near 65.5°, declination near 4° (from memory, to a degree or two).
    const about = effectiveDirection(65.5, 4, 90);
    absoluteClose(day.inclination, about.inclination, 2.5, "from memory");
    absoluteClose(day.beta, about.beta, 0.03, "from memory");
    // The same line in UTM zone 32, whose grid north is true north there at 9° E.
    const utm: Track = {
      ...line.track!,
      system: coordinateSystem("EPSG:32632"),
      x: Float64Array.of(500_000, 500_000),
      y: Float64Array.of(5_538_000, 5_540_000),
    };
    const north = effectiveDirectionOf({...line, track: utm}, plainSettings({fieldDirection: angles}))!;
    absoluteClose(north.inclination, effectiveDirection(62, 3, 0).inclination, 1e-6, "meridian of the zone");
  });

  test("is refused where it cannot be known", () => {
    const of = (own: Partial<SurveyLine>, fieldDirection: Parameters<typeof plainSettings>[0]) =>
      expect(() => effectiveDirectionOf({...line, ...own}, plainSettings(fieldDirection)));
    of({track: undefined}, {fieldDirection: angles}).toThrowError(
      expect.objectContaining({code: "direction/no-azimuth", exitStatus: 2}),
    );
    of({}, {fieldDirection: {kind: "date", date: "2025-07-01"}}).toThrowError(
      expect.objectContaining({code: "direction/no-position", exitStatus: 2}),
    );
    of({}, {fieldDirection: {kind: "angles", inclination: 0, declination: 125}}).toThrowError(
      expect.objectContaining({code: "direction/along-strike", exitStatus: 3}),
    );
  });

  test("is not asked for by component sensors", () => {
    expect(observableNamed("field-along").needsDirection).toBe(false);
    const components = {...line, channels: line.channels.slice(1), track: undefined};
    expect(studyLine(components, plainSettings({boundary: {kind: "depth", depth: 0}})).levels.length).toBe(1);
  });
});
