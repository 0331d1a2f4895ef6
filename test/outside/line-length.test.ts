/** Lengths of lines in longitude and latitude, against PROJ's geodesics (`geod`, Debian's proj-bin). */
import {execFileSync} from "node:child_process";
import {expect, test} from "vitest";
import {openDelimitedSurvey} from "../../lib/acquisition/delimited.ts";
import {linesOf, settingsWith} from "../acquisition/settings.ts";
import {memorySource} from "../formats/memory.ts";

type Degrees = readonly [longitude: number, latitude: number];

function geodesicLength(points: readonly Degrees[]): number {
  const input = points
    .slice(1)
    .map(([longitude, latitude], i) => `${points[i]![1]} ${points[i]![0]} ${latitude} ${longitude}`)
    .join("\n");
  const printed = execFileSync("geod", ["+ellps=WGS84", "-I", "-F", "%.6f", "-f", "%.9f"], {input, encoding: "utf8"});
  return printed
    .trim()
    .split("\n")
    .reduce((sum, row) => sum + Number(row.split("\t")[2]), 0);
}

const straight = (from: Degrees, to: Degrees, count: number): Degrees[] =>
  Array.from({length: count}, (_, i) => [
    from[0] + ((to[0] - from[0]) * i) / (count - 1),
    from[1] + ((to[1] - from[1]) * i) / (count - 1),
  ]);

test.each([
  // Short: the transverse map, within 3 km of its meridian: (3/6371)²/2 = 1.1e-7.
  ["6 km, north-east", [24, 61], [24.06, 61.045], 1e-6],
  // Long: the oblique map; a straight line of degrees stays within 40 km of the great circle: (40/6371)²/2 = 2e-5.
  ["1,350 km, east to west, south", [70, -27.2], [56.5, -29.4], 2e-5],
  ["900 km, south-east, north", [10, 52], [17, 45], 2e-5],
  ["300 km, due north", [-60, 3], [-60, 5.7], 2e-5],
] as const)("a line of %s keeps its length", async (_, from, to, tolerance) => {
  const points = straight(from, to, 400);
  const text = `lon,lat,value\n${points.map(([a, b]) => `${a},${b},1`).join("\n")}\n`;
  const [line] = await linesOf(await openDelimitedSurvey([memorySource(text)], settingsWith()));
  const {chainage, offset} = line!.stations;
  let flown = 0;
  for (let i = 1; i < chainage.length; ++i)
    flown += Math.hypot(chainage[i]! - chainage[i - 1]!, offset[i]! - offset[i - 1]!);
  expect(Math.abs(flown / geodesicLength(points) - 1)).toBeLessThan(tolerance);
});
