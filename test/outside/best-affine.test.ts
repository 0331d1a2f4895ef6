/**
 * Half-widths of strips against the best affine ones in the continuum, by numpy and scipy, on random set-ups: short
 * lines that the program takes whole, and long ones that it answers by windows, mid-line and near the ends.
 */
import {readFileSync} from "node:fs";
import {describe, expect, test} from "vitest";
import {type Random, seededRandom} from "../../lib/numeric/random.ts";
import {meanOver} from "../../lib/operators/functional.ts";
import {intervalsOf} from "../harness/interval-case.ts";
import {runPython} from "../harness/python.ts";

const BEST = readFileSync(new URL("../reference/best_affine.py", import.meta.url), "utf8");

/** What is stated of every strip: no shorter than 0.98 of the best, which would be no interval, no longer than 1.05. */
const SHORTEST = 0.98;
const LONGEST = 1.05;

interface SetUp {
  readonly name: string;
  readonly x: readonly number[];
  readonly z: readonly number[];
  readonly parts: readonly (readonly [number, number])[];
  readonly noise: number;
  readonly bound: number;
  readonly degree: number;
  readonly level: number;
  readonly strips: readonly (readonly [number, number])[];
}

const between = ({uniform}: Random, low: number, high: number): number => low * (high / low) ** uniform();

/** @param apart readings, in heights */
function setUp(seed: number, [least, most]: readonly [number, number], apart: readonly [number, number]): SetUp {
  const random = seededRandom(seed);
  const count = Math.round(between(random, least, most));
  const height = between(random, 5, 60);
  const spacing = height * between(random, ...apart);
  const uneven = random.uniform() < 0.3 ? 0.25 : 0;
  const x = Array.from({length: count}, (_, i) => spacing * i);
  const z = x.map((at) => height * (1 + uneven * Math.sin(at / (7 * height))));
  const end = x[count - 1];
  const apron = [0, 2, 5][Math.floor(3 * random.uniform())] * height;
  const inset = random.uniform() < 0.25 ? 4 * height : -apron;
  const [from, to] = [inset, end - inset];
  const strength = between(random, 0.2, 5);
  const degree = Math.floor(3 * random.uniform()) - 1;
  const width = height * between(random, 0.7, 6);
  const wide = height * between(random, 6, 20);
  const places = [from + 0.5 * width, from + between(random, 2, 8) * height, 0.5 * (from + to), to - width];
  const strips = places.map((at): [number, number] => [
    Math.max(from, at - 0.5 * width),
    Math.min(to, at + 0.5 * width),
  ]);
  const middle = from + (0.3 + 0.4 * random.uniform()) * (to - from);
  strips.push([Math.max(from, middle - 0.5 * wide), Math.min(to, middle + 0.5 * wide)]);
  // Longer than the windows of a long line: one in its middle, one from its end.
  const longest = Math.min(height * between(random, 25, 80), 0.8 * (to - from));
  strips.push([0.5 * (from + to - longest), 0.5 * (from + to + longest)], [from, from + longest]);
  const noise = between(random, 0.003, 0.3);
  return {
    name: `${seed}: ${count} stations, ${(end / height).toFixed(0)} heights long, support ${inset > 0 ? "inside the line" : apron > 0 ? `${apron / height} heights beyond it` : "as long as it"}, noise ${noise.toPrecision(2)}, rms ${strength.toPrecision(2)}, regional ${degree}${uneven > 0 ? ", uneven" : ""}`,
    ...{x, z, parts: [[from, to]], noise, bound: strength * Math.sqrt(to - from), degree, level: 0.95, strips},
  };
}

const SHORT = Array.from({length: 24}, (_, k) => setUp(k + 1, [24, 240], [0.25, 0.8]));
/** 150 to 900 heights long. */
const LONG = Array.from({length: 12}, (_, k) => setUp(k + 101, [600, 1200], [0.25, 0.8]));
/** Some 40 to 180 heights long, with a reading every tenth of a height. */
const DENSE = Array.from({length: 6}, (_, k) => setUp(k + 201, [600, 1200], [0.06, 0.15]));

function ratiosOf(cases: readonly SetUp[]): {readonly name: string; readonly ratio: number}[] {
  const best = JSON.parse(runPython(BEST, JSON.stringify(cases))) as number[][];
  expect(best.length).toBe(cases.length);
  return cases.flatMap(({name, x, z, parts, strips, ...given}, k) => {
    const support = parts.map(([from, to]) => ({from, to}));
    const {level: confidence} = given;
    const solver = intervalsOf({...given, x: Float64Array.from(x), z: Float64Array.from(z), support, confidence});
    const height = [...z].sort((a, b) => a - b)[z.length >> 1];
    return strips.map(([from, to], s) => ({
      name: `${name}; strip ${((from - parts[0][0]) / height).toFixed(1)} – ${((to - parts[0][0]) / height).toFixed(1)} heights from the left end of the support`,
      ratio: solver.interval(meanOver({from, to}, support)).halfWidth / best[k][s],
    }));
  });
}

describe.each([
  ["short lines", SHORT],
  ["long lines, mid-line and near the ends", LONG],
  ["long lines, densely read", DENSE],
])(
  "half-widths of strips over the best affine ones: %s",
  (_, cases) => {
    test("lie between 0.98 and 1.05", () => {
      const ratios = ratiosOf(cases).sort((a, b) => a.ratio - b.ratio);
      const at = (share: number): string => ratios[Math.round(share * (ratios.length - 1))].ratio.toFixed(4);
      console.log(`${ratios.length} strips: least ${at(0)}, median ${at(0.5)}, nine tenths ${at(0.9)}, most ${at(1)}`);
      expect(ratios.filter(({ratio}) => !(ratio >= SHORTEST && ratio <= LONGEST))).toEqual([]);
    });
  },
  300_000,
);
