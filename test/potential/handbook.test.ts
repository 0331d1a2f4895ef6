/**
 * Two-dimensional bodies of the handbooks (Telford, Geldart & Sheriff, Applied Geophysics, 1990; Blakely, Potential
 * Theory in Gravity and Magnetic Applications, 1995; formulas from memory), through the operator and the source laws.
 * The printed figures were worked from the closed formulas and checked by quadrature, to the digits shown; lengths m,
 * densities kg/m³ or kg/m², gravity mGal, field nT.
 */
import {describe, expect, test} from "vitest";
import {gaussLegendre} from "../../lib/numeric/quadrature.ts";
import {applyInto, forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {OBSERVABLES, observableNamed} from "../../lib/potential/catalogue.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {gravity} from "../../lib/potential/gravity.ts";
import {GRAVITY_LAYER, MAGNETIC_LAYER} from "../../lib/potential/source-law.ts";
import {DELIVERY_UNIT, GRAVITATIONAL_CONSTANT} from "../../lib/quantities.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";

const MGAL = 1e-5;
const NANOTESLA = 1e-9;

/** Gravity, m/s², at x of a layer of surface density σ from a to b, z below: seen by the operator. */
function layer(sigma: number, a: number, b: number, z: number, x: number): number {
  const seen = verticalReadings(Float64Array.of(x), Float64Array.of(z), 1);
  const operator = forwardOperator(seen, panelsOn([{from: a, to: b}], (b - a) / 7));
  const density = new Float64Array(operator.panels.count).fill(sigma / GRAVITY_LAYER.densityPerField);
  return applyInto(new Float64Array(1), operator, density)[0];
}

describe("source laws", () => {
  test("1 mGal just above a layer is 23845.94 kg/m², and 2πG·1000 kg/m³ is 0.0419359 mGal a metre", () => {
    absoluteClose(MGAL * GRAVITY_LAYER.densityPerField, 23845.94, 0.005, "digits of the figure");
    absoluteClose(1000 / GRAVITY_LAYER.densityPerField / MGAL, 0.0419359, 5e-8, "digits of the figure");
    // 2πGσ, spelt out with CODATA's G.
    const layerField = 2 * Math.PI * 6.6743e-11 * 23845.94;
    assertClose(1 / GRAVITY_LAYER.densityPerField, layerField / 23845.94, {
      factor: 4,
      scale: layerField / 23845.94,
      because: "three roundings",
    });
  });

  test("1 A/m of sheet magnetisation is 628.3185 nT, and 1 nT 0.00159155 A/m", () => {
    absoluteClose(1 / MAGNETIC_LAYER.densityPerField / NANOTESLA, 628.3185, 5e-5, "digits of the figure");
    absoluteClose(NANOTESLA * MAGNETIC_LAYER.densityPerField, 0.00159155, 5e-9, "digits of the figure");
  });

  test("every observable has a source law of its own dimension and is found by its name", () => {
    expect(OBSERVABLES.length).toBeGreaterThanOrEqual(2);
    for (const observable of OBSERVABLES) {
      expect(observableNamed(observable.name)).toBe(observable);
      expect(DELIVERY_UNIT[observable.source.fieldDimension]).toBeDefined();
    }
    expect(gravity.source).toBe(GRAVITY_LAYER);
    expect(fieldVertical.source).toBe(MAGNETIC_LAYER);
    expect(() => observableNamed("gravitas")).toThrowError(
      expect.objectContaining({code: "observable/unknown", exitStatus: 2, message: expect.stringContaining("gravity")}),
    );
  });
});

describe("gravity of handbook bodies", () => {
  test.each([
    [0, 2.955777075],
    [30, 2.936346599],
    [200, 1.769780967],
    [400, 0.398454284],
  ])("thin strip 400 m wide, 100 m down, 1e5 kg/m², at x = %d", (x, want) => {
    absoluteClose(layer(1e5, -200, 200, 100, x) / MGAL, want, 5e-10, "digits of the figure");
  });

  test.each([
    [-100, 1.048396592],
    [0, 2.096793185],
    [100, 3.145189778],
  ])("step of 1e5 kg/m², 100 m down, as a strip with a far edge, at x = %d", (x, want) => {
    // An edge at distance D leaves out 2Gσ z/D = 1.3e-10 mGal at D = 1e12 m.
    absoluteClose(layer(1e5, 0, 1e12, 100, x) / MGAL, want, 1.2e-9, "digits of the figure and the far edge");
  });

  test.each([
    [-500, 0.301626157],
    [-100, 0.863795994],
    [0, 1.258075911],
    [100, 1.652355827],
    [500, 2.214525666],
  ])("fault slab from 100 to 300 m down, 300 kg/m³, by steps integrated over depth, at x = %d", (x, want) => {
    const rule = gaussLegendre(20);
    let sum = 0;
    // Poles at z = ±ix and a branch point at depth 0: ρ ≥ 3.7 for 20 nodes on [100, 300], error below 1e-20.
    for (let k = 0; k < 20; ++k) sum += 100 * rule.weights[k] * layer(300, 0, 1e12, 200 + 100 * rule.nodes[k], x);
    absoluteClose(sum / MGAL, want, 1.2e-9, "digits of the figure and the far edge");
  });

  test.each([
    [0, 0.307362874],
    [50, 0.261764266],
    [100, 0.202561867],
    [500, 0.045598607],
  ])(
    "thin vertical sheet from 50 to 500 m down, 1e4 kg/m², by line masses integrated over depth, at x = %d",
    (x, want) => {
      const rule = gaussLegendre(60);
      let sum = 0;
      for (let k = 0; k < 60; ++k) sum += 225 * rule.weights[k] * lineMass(1e4, 275 + 225 * rule.nodes[k], x);
      absoluteClose(sum / MGAL, want, 1e-9, "digits of the figure");
    },
  );

  test.each([
    [0, 1.04839659],
    [50, 0.83871727],
    [100, 0.5241983],
    [200, 0.20967932],
  ])("horizontal cylinder of radius 50 m, 1000 kg/m³, axis 100 m down, at x = %d", (x, want) => {
    // Outside, a cylinder attracts as its mass on the axis.
    absoluteClose(lineMass(1000 * Math.PI * 50 * 50, 100, x) / MGAL, want, 5e-9, "digits of the figure");
  });
});

/** Gravity of a line mass λ as a strip a ten-thousandth of its depth wide: wrong by (1e-4)²/12 at most. */
function lineMass(lambda: number, depth: number, x: number): number {
  const width = 1e-4 * depth;
  return layer(lambda / width, -width / 2, width / 2, depth, x);
}

test("gravity of a line mass is 2Gλz/(x² + z²)", () => {
  for (const x of [0, 70, -400])
    absoluteClose(
      lineMass(5e6, 120, x) / ((2 * GRAVITATIONAL_CONSTANT * 5e6 * 120) / (x * x + 120 * 120)),
      1,
      2e-9,
      "(width/depth)²/12",
    );
});

test.each([
  [0, 304.4051016],
  [10, 295.126024],
  [20, 269.8963769],
  [50, 164.0509362],
])("vertical dyke 40 m wide, top 50 m down, 2 A/m, vertical field: %d m off its middle", (x, want) => {
  const panels = panelsOn([{from: -20, to: 20}], 4);
  const operator = forwardOperator(verticalReadings(Float64Array.of(x), Float64Array.of(50), 1), panels);
  const density = new Float64Array(panels.count).fill(2 / MAGNETIC_LAYER.densityPerField);
  const field = applyInto(new Float64Array(1), operator, density)[0];
  // The figure took μ0 of CODATA 2022 to ten digits.
  absoluteClose(field / NANOTESLA, want, 1e-7, "digits of the figure");
});
