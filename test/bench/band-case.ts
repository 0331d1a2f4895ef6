/** How often the simultaneous band misses any of many numbers at once, with ordinary noise. */

import {seededRandom} from "../../lib/numeric/random.ts";
import type {Functional} from "../../lib/operators/functional.ts";
import {meanOver} from "../../lib/operators/functional.ts";
import {readingsOf} from "../../lib/operators/readings.ts";
import {BOUND, type CoverageSetUp, SET_UPS, SUPPORT, sensorsOf} from "../harness/coverage-kinds.ts";
import {fineNodes, inner, missedBy, readingsOfTruth, seen} from "../harness/fine-continuum.ts";
import {bandOf, intervalsOf, readAt, VERTICAL} from "../harness/interval-case.ts";
import {FAMILIES} from "../harness/truths.ts";
import type {BenchCase} from "./bench-case.ts";
import {markdownTable} from "./results.ts";

const DRAWS = 2000;
const STATED = 0.95;
/** A new truth after so many draws of noise. */
const DRAWS_A_TRUTH = 20;

interface Asked {
  readonly functional: Functional;
  readonly q: (t: number) => number;
}

/** Means over strips of 15 m all along, over two wide ones, and the field 3 m up and 8 m up. */
const ASKED: readonly Asked[] = [
  ...Array.from({length: 14}, (_, k) => [70 + 32 * k, 85 + 32 * k] as const)
    .concat([
      [100, 250],
      [90, 470],
    ])
    .map(
      ([from, to]): Asked => ({
        functional: meanOver({from, to}, [SUPPORT]),
        q: (t) => (t > from && t < to ? 1 / (to - from) : 0),
      }),
    ),
  ...[3, 8].flatMap((z) =>
    [80, 188, 301, 433, 560].map(
      (x): Asked => ({functional: readAt(x, z, [SUPPORT]), q: (t) => seen({reads: "field", x, z}, t)}),
    ),
  ),
];

function measured(setUp: CoverageSetUp) {
  const sensors = sensorsOf(setUp);
  const nodes = fineNodes(
    SUPPORT.from,
    SUPPORT.to,
    1,
    ASKED.flatMap(({functional: {from, to}}) => [from, to]),
  );
  const given = {
    ...{x: setUp.x, z: setUp.z, support: [SUPPORT], noise: sensors[0]!.noise, bound: BOUND},
    ...{degree: setUp.degree, layout: setUp.layout, confidence: STATED},
    readings: readingsOf([{x: setUp.x, z: setUp.z, noise: sensors[0]!.noise, response: VERTICAL}]),
  };
  const single = intervalsOf(given);
  const questions = ASKED.map(({functional, q}) => {
    const asked = nodes.at.map(q);
    const own = single.affine(functional).weights.map((weight, i) => weight / sensors[i]!.noise);
    return {functional, asked, missed: missedBy(nodes, sensors, own, asked)};
  });
  const families = FAMILIES.filter(({place}) => place !== "outside");
  const random = seededRandom(314);
  let violated = 0;
  let most = 0;
  let clean = new Float64Array();
  let truth: readonly number[] = [];
  for (let draw = 0; draw < DRAWS; ++draw) {
    if (draw % DRAWS_A_TRUTH === 0) {
      const turn = draw / DRAWS_A_TRUTH;
      const {asked, missed} = questions[turn % questions.length]!;
      const f = families[turn % families.length]!.truth({nodes, q: asked, missed, bound: 0.999 * BOUND}, random);
      clean = readingsOfTruth(nodes, sensors, f).map(
        (value, i) => value + (setUp.degree < 1 ? 0 : 40 - 0.07 * sensors[i]!.x),
      );
      truth = questions.map((question) => inner(nodes, f, question.asked));
    }
    const band = bandOf({...given, values: clean.map((value, i) => value + sensors[i]!.noise * random.normal())});
    const far = questions.reduce((worst, {functional}, k) => {
      const {value, halfWidth} = band.interval(functional);
      return Math.max(worst, Math.abs(value - truth[k]!) / halfWidth);
    }, 0);
    most = Math.max(most, far);
    if (far > 1) ++violated;
  }
  return {violated, most};
}

export const bandCase: BenchCase = {
  name: "band",
  title: "Simultaneous band: numbers missed",
  run() {
    const found = SET_UPS.filter(({channels}) => channels.length === 1).map((setUp) => ({setUp, ...measured(setUp)}));
    const allowed = Math.round((1 - STATED) * DRAWS);
    return {
      figures: found.map(({setUp, violated}) => ({
        what: `${setUp.name}: draws with any number outside`,
        program: `${violated} of ${DRAWS}`,
        baseline: "–",
        ratio: undefined,
        target: `≤ ${allowed}`,
        met: violated <= allowed,
      })),
      notes: [
        `${DRAWS} draws of normal noise on each set-up, ${ASKED.length} numbers asked of each draw, stated ${100 * STATED} % for all of them at once. Truths are random ones in the ball and the worst for one of the numbers, a new one every ${DRAWS_A_TRUTH} draws.`,
      ],
      tables: [
        markdownTable(
          ["set-up", "draws with any number outside", "farthest from the middle, in half-widths"],
          found.map(({setUp, violated, most}) => [setUp.name, `${violated} of ${DRAWS}`, most.toFixed(2)]),
        ),
      ],
    };
  },
};
