/** The operator by multipoles: against its matrix, and against its own adjoint. */
import {expect, test} from "vitest";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {adjointInto, applyInto, forwardOperator} from "../../lib/operators/forward.ts";
import {multipoleOperator} from "../../lib/operators/multipole.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {type Readings, readingsOf} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten} from "../../lib/operators/whitened.ts";
import {whitenedOperator} from "../../lib/operators/whitened-operator.ts";
import {FIELD, GRADIENT, TOTAL_FIELD, unevenLine} from "../harness/uneven-line.ts";

const largest = (values: Float64Array): number => values.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
const sum = (values: Float64Array): number => values.reduce((total, value) => total + Math.abs(value), 0);
const dot = (a: Float64Array, b: Float64Array): number => a.reduce((total, value, i) => total + value * b[i]!, 0);
const apart = (a: Float64Array, b: Float64Array): number => largest(a.map((value, i) => value - b[i]!));

const relief = {
  x: Float64Array.from({length: 120}, (_, k) => 40 * k - 200),
  y: Float64Array.from({length: 120}, (_, k) => -6 + 4 * Math.sin(k / 3)),
};
const onRelief = (): {readings: Readings; panels: ReturnType<typeof panelsOn>} => ({
  readings: unevenLine({stations: 600, sway: 0.2}).readings,
  panels: panelsOn([{from: -100, to: 3100}], 3, relief),
});
/** Far from the sources, three readings at one place, two components of one panel each. */
const few = () => ({
  readings: readingsOf([
    {x: Float64Array.of(5, 5, 5, -4000), z: Float64Array.of(1, 8, 90, 3), response: FIELD, noise: 1},
  ]),
  panels: panelsOn(
    [
      {from: 0, to: 1},
      {from: 7000, to: 7001},
    ],
    2,
  ),
});

const CASES = {
  "heights ±10 %": () => unevenLine({stations: 700, sway: 0.1}),
  "heights 1 to 10": () => unevenLine({stations: 500, sway: 9 / 11}),
  "a gap, total field": () => unevenLine({stations: 700, sway: 0.4, gap: true, responses: [TOTAL_FIELD]}),
  "two channels": () => unevenLine({stations: 500, sway: 0.2, responses: [FIELD, GRADIENT]}),
  "a boundary with relief": onRelief,
  "few panels far apart": few,
};

test.each(Object.entries(CASES))("%s: as the matrix does", (_, made) => {
  const {readings, panels} = made();
  const random = seededRandom(5);
  const density = normalDeviates(random, panels.count);
  const data = normalDeviates(random, readings.count);
  const dense = forwardOperator(readings, panels);
  const fast = multipoleOperator(readings, panels);
  const seen = fast.applyInto(new Float64Array(readings.count), density);
  const back = fast.adjointInto(new Float64Array(panels.count), data);
  const entry = largest(dense.matrix);
  // Expansions leave out 1e-10 of the kernel at the distance of the boxes; that is far below the largest.
  expect(apart(seen, applyInto(new Float64Array(readings.count), dense, density))).toBeLessThan(
    1e-11 * entry * sum(density),
  );
  expect(apart(back, adjointInto(new Float64Array(panels.count), dense, data))).toBeLessThan(1e-11 * entry * sum(data));
  // Transposed step by step: rounding of the sums alone.
  expect(Math.abs(dot(seen, data) - dot(density, back))).toBeLessThan(1e-14 * entry * sum(density) * sum(data));
});

test("nothing as large as the matrix is kept", () => {
  const {readings, panels} = unevenLine({stations: 4000, sway: 0.1});
  expect(multipoleOperator(readings, panels).near).toBeLessThan(0.05 * readings.count * panels.count);
});

test("whitened, it acts as the whitened matrix, correlated noise included", () => {
  const {readings, panels, values} = unevenLine({stations: 300, sway: 0.3, noiseLength: 12});
  const system = whiten(forwardOperator(readings, panels), readings, values, regionalBasis(readings, -1));
  const whitened = whitenedOperator(multipoleOperator(readings, panels), readings);
  const random = seededRandom(6);
  const source = normalDeviates(random, panels.count);
  const data = normalDeviates(random, readings.count);
  const operator = {readings: readings.count, panels, matrix: system.matrix};
  const entry = largest(system.matrix);
  const seen = whitened.applyInto(new Float64Array(readings.count), source);
  const back = whitened.adjointInto(new Float64Array(panels.count), data);
  // As above.
  expect(apart(seen, applyInto(new Float64Array(readings.count), operator, source))).toBeLessThan(
    1e-11 * entry * sum(source),
  );
  expect(apart(back, adjointInto(new Float64Array(panels.count), operator, data))).toBeLessThan(
    1e-11 * entry * sum(data),
  );
});
