/**
 * The component along the line and the one down are a conjugate pair: F has only waves that die upward, so along the whole
 * line Re(iF) = −H Re F, H the Hilbert transform, −i sgn k. Checked by numpy's discrete Fourier transform on a long line.
 */
import {describe, expect, test} from "vitest";
import {applyInto, forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {readingsOf} from "../../lib/operators/readings.ts";
import {downwardGradient} from "../../lib/potential/downward-gradient.ts";
import {fieldAlong} from "../../lib/potential/field-along.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import type {Response} from "../../lib/potential/kernel.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {runPython} from "../harness/python.ts";
import {evenly} from "../harness/synthetic-line.ts";

const TRANSFORM = `
import json, sys, numpy
d = numpy.array(json.load(sys.stdin))
k = numpy.fft.fftfreq(d.size)
print(json.dumps([float(v) for v in -numpy.fft.ifft(-1j * numpy.sign(k) * numpy.fft.fft(d)).real[d.size // 2 - 300 : d.size // 2 + 301]]))
`;

describe.each([
  ["field", fieldVertical.response(), fieldAlong.response()],
  ["gradient", downwardGradient(fieldVertical).response(undefined), downwardGradient(fieldAlong).response(undefined)],
])("%s", (_, down: Response, along: Response) => {
  test("along the line is minus the Hilbert transform of the one down", () => {
    // Layers that add up to nothing over 80 m, 20 m below 65,536 readings a metre apart.
    const COUNT = 65_536;
    const x = evenly(-COUNT / 2, COUNT / 2 - 1, COUNT);
    const panels = panelsOn([{from: -40, to: 40}], 5);
    const density = panels.centre.map((t) => (Math.abs(t) < 20 ? 1 : -1) + 0.5 * Math.sign(t));
    const read = (at: Float64Array, response: Response): Float64Array => {
      const readings = readingsOf([{x: at, z: new Float64Array(at.length).fill(20), response, noise: 1}]);
      return applyInto(new Float64Array(at.length), forwardOperator(readings, panels), density);
    };
    const theirs = JSON.parse(runPython(TRANSFORM, JSON.stringify([...read(x, down)]))) as number[];
    const ours = read(evenly(-300, 300, 601), along);
    const size = ours.reduce((most, v) => Math.max(most, Math.abs(v)), 0);
    expect(theirs.length).toBe(601);
    // Sampling costs e^(−2π·20/1); repeats of the line every 65 km add their field, of no net source but a moment of 800 m²:
    // 800/(π 65536²) = 6e-8 times π²/3, against a field of about one.
    ours.forEach((value, i) => {
      absoluteClose(theirs[i] / size, value / size, 5e-7, "repeats of the line in the discrete transform");
    });
  });
});
