/** The field of a density on panels, carried to a height above the boundary or down onto it. */
import type {PanelComponent, Panels} from "../operators/panels.ts";
import {harmonicMeasure} from "../potential/poisson.ts";

/**
 * Below half a panel's width the steps between panels would show (they die like e^(−2πz/w)), so there the density
 * is taken as the broken line through the panel centres; above, as the panels themselves.
 */
const SMOOTH_BELOW = 0.5;

/**
 * Writes what each panel's density adds to the field at height z ≥ 0 above chainage x.
 *
 * @param target receives one entry a panel from `offset` on
 */
export function levelRowInto(target: Float64Array, offset: number, panels: Panels, x: number, z: number): Float64Array {
  target.fill(0, offset, offset + panels.count);
  for (const component of panels.components) {
    const {first, count} = component;
    if (z === 0) betweenCentres(target, offset, panels, component, x);
    else if (z < SMOOTH_BELOW * panels.width[first]) brokenLine(target, offset, panels, component, x, z);
    else
      for (let j = first; j < first + count; ++j)
        target[offset + j] = harmonicMeasure(x, z, panels.from[j], panels.to[j]);
  }
  return target;
}

/** On the boundary: straight between panel centres, level beyond the outermost, zero off the support. */
function betweenCentres(
  target: Float64Array,
  offset: number,
  panels: Panels,
  component: PanelComponent,
  x: number,
): void {
  const {interval, first, count} = component;
  if (x < interval.from || x > interval.to) return;
  const place = Math.min(Math.max((x - panels.centre[first]) / panels.width[first], 0), count - 1);
  const left = Math.floor(place);
  target[offset + first + left] += 1 - (place - left);
  if (place > left) target[offset + first + left + 1] += place - left;
}

/** Just above the boundary: the same broken line, which bends at each centre, in two straight pieces a panel. */
function brokenLine(
  target: Float64Array,
  offset: number,
  panels: Panels,
  component: PanelComponent,
  x: number,
  z: number,
): void {
  const {first, count, edges} = component;
  for (let k = 0; k < count; ++k) {
    const j = first + k;
    const before = Math.max(k - 1, 0) - k;
    const after = Math.min(k + 1, count - 1) - k;
    const left = straightPiece(x, z, edges[k], panels.centre[j]);
    const right = straightPiece(x, z, panels.centre[j], edges[k + 1]);
    // At an edge the line is half of either neighbour; beyond the outermost centre it is level.
    target[offset + j] += 0.5 * left.start + left.end + right.start + 0.5 * right.end;
    target[offset + j + before] += 0.5 * left.start;
    target[offset + j + after] += 0.5 * right.end;
  }
}

/** ∫_a^b P_z(x − t) ℓ(t) dt in closed form, ℓ falling from 1 to 0 (`start`) or rising from 0 to 1 (`end`). */
function straightPiece(x: number, z: number, a: number, b: number): {readonly start: number; readonly end: number} {
  const fromA = a - x;
  const fromB = b - x;
  const width = b - a;
  const ratio = Math.log1p((width * (fromB + fromA)) / (fromA * fromA + z * z));
  const measure = harmonicMeasure(x, z, a, b);
  const end = (-fromA / width) * measure + (z * ratio) / (2 * Math.PI * width);
  return {start: measure - end, end};
}
