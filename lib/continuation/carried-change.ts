/** How much more or less a sensor would read of a source after a step up or down. */
import {ModelError} from "../errors.ts";
import {boundaryAt} from "../geometry/boundary-line.ts";
import type {Panels} from "../operators/panels.ts";
import type {Response} from "../potential/kernel.ts";
import {levelRowInto} from "./field-on-level.ts";

export interface PanelSource {
  readonly panels: Panels;
  /** f on the panels, SI. */
  readonly density: Float64Array;
}

/**
 * What the source adds at height `to` less what it adds at height `from`; heights above the datum of the section.
 * The regional does not change with height and is not in it.
 * @throws {ModelError} `crossings/below-boundary` where either height is not above the boundary
 */
export function carriedChange(
  {panels, density}: PanelSource,
  response: Response,
  x: number,
  from: number,
  to: number,
): number {
  const y = boundaryAt(panels.boundary, x);
  if (!(Math.min(from, to) > y))
    throw new ModelError(
      "crossings/below-boundary",
      `The common level lies ${(y - Math.min(from, to)).toPrecision(3)} m below the boundary at chainage ${x.toFixed(1)}, where the sources are. Give a higher --level or a lower --boundary.`,
    );
  const row = new Float64Array(panels.count);
  const at = (z: number): number => {
    levelRowInto(row, 0, panels, x, y, z - y, response);
    let sum = 0;
    for (let j = 0; j < panels.count; ++j) sum += row[j] * density[j];
    return sum;
  };
  return at(to) - at(from);
}
