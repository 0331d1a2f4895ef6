/** The field of a density on panels, carried to a height above the boundary or down onto it. */
import {ModelError} from "../errors.ts";
import type {PanelComponent, Panels} from "../operators/panels.ts";
import {amplitudeIm, amplitudeRe, kernelOverPiece, type Response, rampOverPiece} from "../potential/kernel.ts";

/**
 * Below half a panel's width the steps between panels would show (they die like e^(−2πz/w)), so there the density
 * is taken as the broken line through the panel centres; above, as the panels themselves.
 */
const SMOOTH_BELOW = 0.5;

/**
 * Writes what each panel's density adds to a reading at height `above` ≥ 0 over the boundary at chainage x.
 *
 * @param target receives one entry a panel from `offset` on
 * @param y height of the boundary at x above the datum, m
 * @throws {ModelError} `level/on-boundary` for other than Re F there
 */
export function levelRowInto(
  target: Float64Array,
  offset: number,
  panels: Panels,
  x: number,
  y: number,
  above: number,
  response: Response,
): Float64Array {
  target.fill(0, offset, offset + panels.count);
  if (above === 0 && !(response.order === 0 && response.im === 0))
    throw new ModelError(
      "level/on-boundary",
      "On the boundary itself only the downward component has a value everywhere. Ask for a level above it, or for the boundary field.",
    );
  if (above === 0 && !panels.flat) return limitFromAbove(target, offset, panels, x, y, response);
  const z = y + above;
  for (const component of panels.components) {
    const {first, count} = component;
    if (above === 0) betweenCentres(target, offset, panels, component, x, response.re);
    else if (above < SMOOTH_BELOW * panels.width[first]) brokenLine(target, offset, panels, component, x, z, response);
    else addPieces(target, offset, panels, first, first + count, x, z, response, 1);
  }
  return target;
}

/** Adds `weight` times the constant densities of the panels `first … last − 1`, seen from (x, z). */
function addPieces(
  target: Float64Array,
  offset: number,
  panels: Panels,
  first: number,
  last: number,
  x: number,
  z: number,
  response: Response,
  weight: number,
): void {
  const aRe = amplitudeRe(response);
  const aIm = amplitudeIm(response);
  for (let j = first; j < last; ++j) {
    const a = panels.from[j] - x;
    const b = panels.to[j] - x;
    target[offset + j] +=
      weight * kernelOverPiece(aRe, aIm, response.order, a, z - panels.yFrom[j], b, z - panels.yTo[j]);
  }
}

/**
 * On a boundary that slopes the limit from above of Re F is cos²θ of the density there, not the density itself (half
 * the turn of the logarithm, iπ, over πi (1 + i tan θ)), and what all other panels add. It is taken at panel centres,
 * where the own panel's logarithm is iπ, and read between them: at the corners of the broken boundary it has no limit.
 * Off the support only the others are there.
 */
function limitFromAbove(
  target: Float64Array,
  offset: number,
  panels: Panels,
  x: number,
  y: number,
  response: Response,
): Float64Array {
  const at = panels.components.find(({interval}) => interval.from <= x && x <= interval.to);
  if (at === undefined) {
    addPieces(target, offset, panels, 0, panels.count, x, y, response, 1);
    return target;
  }
  const place = placeBetweenCentres(panels, at, x);
  const left = Math.floor(place);
  for (const [own, weight] of [
    [at.first + left, 1 - (place - left)],
    [at.first + left + 1, place - left],
  ] as const) {
    if (!(weight > 0)) continue;
    const [centre, height] = [panels.centre[own], 0.5 * (panels.yFrom[own] + panels.yTo[own])];
    addPieces(target, offset, panels, 0, own, centre, height, response, weight);
    addPieces(target, offset, panels, own + 1, panels.count, centre, height, response, weight);
    const slope = (panels.yTo[own] - panels.yFrom[own]) / panels.width[own];
    target[offset + own] += (weight * response.re) / (1 + slope * slope);
  }
  return target;
}

/** How many panels to the right of the first centre x lies, at least 0 and at most the last centre. */
const placeBetweenCentres = (panels: Panels, {first, count}: PanelComponent, x: number): number =>
  Math.min(Math.max((x - panels.centre[first]) / panels.width[first], 0), count - 1);

/** On a flat boundary: straight between panel centres, level beyond the outermost, zero off the support. */
function betweenCentres(
  target: Float64Array,
  offset: number,
  panels: Panels,
  component: PanelComponent,
  x: number,
  strength: number,
): void {
  const {interval, first} = component;
  if (x < interval.from || x > interval.to) return;
  const place = placeBetweenCentres(panels, component, x);
  const left = Math.floor(place);
  target[offset + first + left] += strength * (1 - (place - left));
  if (place > left) target[offset + first + left + 1] += strength * (place - left);
}

/** Just above the boundary: the same broken line, which bends at each centre, in two straight pieces a panel. */
function brokenLine(
  target: Float64Array,
  offset: number,
  panels: Panels,
  {first, count}: PanelComponent,
  x: number,
  z: number,
  response: Response,
): void {
  const {order} = response;
  const aRe = amplitudeRe(response);
  const aIm = amplitudeIm(response);
  for (let k = 0; k < count; ++k) {
    const j = first + k;
    const before = Math.max(k - 1, 0) - k;
    const after = Math.min(k + 1, count - 1) - k;
    const a = panels.from[j] - x;
    const m = panels.centre[j] - x;
    const b = panels.to[j] - x;
    const da = z - panels.yFrom[j];
    const dm = z - 0.5 * (panels.yFrom[j] + panels.yTo[j]);
    const db = z - panels.yTo[j];
    // Of a density that rises to 1 at the centre, and at the far edge, and what is left of a constant one.
    const toCentre = rampOverPiece(aRe, aIm, order, a, da, m, dm);
    const fromEdge = kernelOverPiece(aRe, aIm, order, a, da, m, dm) - toCentre;
    const toEdge = rampOverPiece(aRe, aIm, order, m, dm, b, db);
    const fromCentre = kernelOverPiece(aRe, aIm, order, m, dm, b, db) - toEdge;
    // At an edge the line is half of either neighbour; beyond the outermost centre it is level.
    target[offset + j] += 0.5 * fromEdge + toCentre + fromCentre + 0.5 * toEdge;
    target[offset + j + before] += 0.5 * fromEdge;
    target[offset + j + after] += 0.5 * toEdge;
  }
}
