/** Crossings of a survey: where they are, what is read there, and what is no crossing. */
import {describe, expect, test} from "vitest";
import {openDelimitedSurvey} from "../../lib/acquisition/delimited.ts";
import type {AcquisitionSettings} from "../../lib/acquisition/settings.ts";
import {seededRandom} from "../../lib/numeric/random.ts";
import {type CrossedSurvey, findCrossings} from "../../lib/survey/crossings.ts";
import {settingsWith} from "../acquisition/settings.ts";
import {memorySource} from "../formats/memory.ts";
import {absoluteClose} from "../harness/assert-close.ts";

async function crossed(text: string, own: Partial<AcquisitionSettings> = {}, geographic = false) {
  return findCrossings(await openDelimitedSurvey([memorySource(text)], settingsWith(own)), geographic);
}

type Station = readonly [id: string, x: number, y: number, ...rest: readonly number[]];
const table = (stations: readonly Station[], header = "line,x,y,gravity"): string =>
  `${[header, ...stations.map((cells) => cells.join(","))].join("\n")}\n`;

/** Stations every `step` metres, ends included; `value` of x and y. */
function flown(
  id: string,
  from: readonly [number, number],
  to: readonly [number, number],
  step: number,
  value: (x: number, y: number) => number = () => 0,
): Station[] {
  const steps = Math.round(Math.hypot(to[0] - from[0], to[1] - from[1]) / step);
  return Array.from({length: steps + 1}, (_, k) => {
    const [x, y] = [from[0] + ((to[0] - from[0]) * k) / steps, from[1] + ((to[1] - from[1]) * k) / steps];
    return [id, x, y, value(x, y)];
  });
}

const pairs = ({lines, crossings: {count, first, second}}: CrossedSurvey): string[] =>
  Array.from({length: count}, (_, i) => `${lines[first.line[i]!]}×${lines[second.line[i]!]}`);
const codes = ({notices}: CrossedSurvey): string[] => notices.map(({code}) => code);

test("place, chainage, height and reading of both lines, each on its own axis", async () => {
  // Everything is linear along the lines, so that reading between stations is exact.
  const text = table(
    [
      ...flown("L", [1000, 2050], [1200, 2050], 7).map(
        (s): Station => [...s.slice(0, 3), 100 + s[1] / 10, s[1] - s[2]] as never,
      ),
      ...flown("T", [1110, 2200], [1110, 2000], 9).map((s): Station => [...s.slice(0, 3), 300, s[2]] as never),
    ],
    "line,x,y,elevation,gravity",
  );
  const found = await crossed(text, {clearance: undefined});
  expect(pairs(found)).toEqual(["L×T"]);
  expect(found.heights).toBe("elevation");
  const {x, y, first, second} = found.crossings;
  const because = "a few roundings of coordinates of 2,000";
  absoluteClose(x[0]!, 1110, 1e-9, because);
  absoluteClose(y[0]!, 2050, 1e-9, because);
  // East from the west end; north from the south end, against the flight.
  absoluteClose(first.chainage[0]!, 110, 1e-9, because);
  absoluteClose(second.chainage[0]!, 50, 1e-9, because);
  absoluteClose(first.height[0]!, 211, 1e-9, because);
  absoluteClose(second.height[0]!, 300, 1e-9, because);
  absoluteClose(first.value[0]!, (1110 - 2050) * 1e-5, 1e-14, because);
  absoluteClose(second.value[0]!, 2050e-5, 1e-14, because);
});

test("repeated passes are lines of their own, and cross others each", async () => {
  const pass = (y: number): Station[] => flown("L", [0, y], [100, y], 5);
  const tie = flown("T", [52, -50], [52, 50], 5);
  const found = await crossed(table([...pass(1), ...tie, ...pass(-1)]));
  expect(found.lines).toEqual(["L.1", "T", "L.2"]);
  expect(pairs(found)).toEqual(["L.1×T", "T×L.2"]);
});

test("a zig-zag meets a line once a leg", async () => {
  const legs = [0, 1, 2, 3].flatMap((k) =>
    flown("Z", [100 * k, k % 2 ? 100 : 0], [100 * (k + 1), k % 2 ? 0 : 100], 4).slice(k ? 1 : 0),
  );
  const found = await crossed(table([...legs, ...flown("L", [-10, 52], [410, 52], 7)]));
  expect(pairs(found)).toEqual(["Z×L", "Z×L", "Z×L", "Z×L"]);
  expect([...found.crossings.x].map((x) => Math.round(x))).toEqual([52, 148, 252, 348]);
});

test("a line flown again, a metre beside or across itself, is no crossing and is remarked on", async () => {
  const {normal} = seededRandom(3);
  const jittered = (id: string): Station[] =>
    flown(id, [0, 0], [2000, 0], 5).map(([, x, y]) => [id, x + normal(), y + normal(), 0]);
  const found = await crossed(table([...jittered("L"), ...jittered("again")]));
  expect(found.crossings.count).toBe(0);
  expect(codes(found)).toEqual(["crossings/alongside"]);
  // The tie still meets both.
  const three = await crossed(table([...jittered("L"), ...jittered("again"), ...flown("T", [777, -90], [777, 90], 5)]));
  expect(pairs(three)).toEqual(["L×T", "again×T"]);
});

test("a gap is not read across, but a station in it is", async () => {
  const gappy = flown("L", [0, 0], [400, 0], 5).filter(([, x]) => x < 150 || x > 250 || x === 200);
  const tie = (id: string, x: number) => flown(id, [x, -50], [x, 50], 4);
  const found = await crossed(table([...gappy, ...tie("in", 180), ...tie("at", 200), ...tie("out", 302)]));
  expect(pairs(found)).toEqual(["L×at", "L×out"]);
  expect(codes(found)).toEqual(["crossings/in-gaps"]);
});

test("degrees: over the 180° meridian, angles and places as on the ground", async () => {
  const fold = (longitude: number): number => (longitude > 180 ? longitude - 360 : longitude);
  // At 60° north a degree of longitude is half as long: this is a cross at right angles on the ground.
  const one = Array.from({length: 41}, (_, k): Station => ["A", fold(179.98 + 0.001 * k), 60 - 0.01 + 0.0005 * k, k]);
  const other = Array.from({length: 41}, (_, k): Station => ["B", fold(179.98 + 0.001 * k), 60 + 0.01 - 0.0005 * k, k]);
  const found = await crossed(table([...one, ...other], "line,longitude,latitude,gravity"), {}, true);
  expect(pairs(found)).toEqual(["A×B"]);
  absoluteClose(Math.abs(found.crossings.x[0]!), 180, 1e-9, "roundings of 180");
  absoluteClose(found.crossings.y[0]!, 60, 1e-9, "roundings of 60");
});

describe("refused", () => {
  test.each([
    [
      "lines known by chainage only",
      "line,chainage,gravity\nA,0,1\nA,5,1\nB,0,1\nB,5,1\n",
      {},
      "crossings/no-coordinates",
    ],
    [
      "a component along the line",
      table([...flown("A", [0, 0], [50, 0], 5), ...flown("B", [20, -9], [20, 9], 3)], "line,x,y,value"),
      {channels: [{role: "value", observable: "gravity-along", unit: undefined, noise: 1}]},
      "crossings/along-component",
    ],
  ])("%s", async (_, text, own, code) => {
    await expect(crossed(text, own)).rejects.toMatchObject({code});
  });

  test("lines of a grid", async () => {
    const survey = await openDelimitedSurvey([memorySource(table(flown("A", [0, 0], [50, 0], 5)))], settingsWith());
    await expect(findCrossings({...survey, fromGrid: true}, false)).rejects.toMatchObject({code: "crossings/grid"});
  });
});

test("a line that cannot be read is named, and the others are compared", async () => {
  const found = await crossed(
    table([...flown("A", [0, 0], [50, 0], 5), ["lonely", 7, 7, 1], ...flown("B", [21, -9], [21, 9], 3)]),
  );
  expect(found.failures.map(({id, failure}) => [id, failure.code])).toEqual([["lonely", "line/one-station"]]);
  expect(pairs(found)).toEqual(["A×B"]);
});
