/**
 * crossings.geojson: one point a crossing, to be drawn on a map. Source: RFC 7946; positions are longitude, latitude
 * in degrees on WGS 84, to seven decimals, a centimetre.
 */
import type {Transformation} from "../geometry/transformation.ts";
import {DELIVERY_UNIT} from "../quantities.ts";
import type {CrossingResult} from "../study/crossing-result.ts";
import type {TextSink} from "./product.ts";

/** Characters gathered before they are handed on. */
const BLOCK = 1 << 16;
const DECIMALS = 1e7;

/** @param way from the delivered coordinates to longitude and latitude on WGS 84 */
export async function writeCrossingsGeojson(
  sink: TextSink,
  result: CrossingResult,
  way: Transformation,
): Promise<void> {
  const {crossed, measured, carried, outliers} = result;
  const {lines, observable, crossings} = crossed;
  const {symbol, factor} = DELIVERY_UNIT[observable.dimension];
  const {x, y, first, second} = crossings;
  const far = new Set(outliers);
  let held = '{"type":"FeatureCollection","features":[';
  for (let i = 0; i < crossings.count; ++i) {
    const position = way.apply(x[i]!, y[i]!).map((degrees) => Math.round(degrees * DECIMALS) / DECIMALS);
    const feature = {
      type: "Feature",
      geometry: {type: "Point", coordinates: position},
      properties: {
        line_a: lines[first.line[i]!]!,
        line_b: lines[second.line[i]!]!,
        chainage_a_m: rounded(first.chainage[i]),
        chainage_b_m: rounded(second.chainage[i]),
        height_a_m: rounded(first.height[i]),
        height_b_m: rounded(second.height[i]),
        [`difference_${symbol}`]: rounded(measured.differences[i]! / factor),
        ...(carried === undefined
          ? {}
          : {
              common_level_m: rounded(carried.readings.level[i]),
              [`carried_difference_${symbol}`]: rounded(carried.differences[i]! / factor),
            }),
        outlier: far.has(i),
      },
    };
    held += `${i === 0 ? "\n" : ",\n"}${JSON.stringify(feature)}`;
    if (held.length >= BLOCK) {
      await sink.write(held);
      held = "";
    }
  }
  await sink.write(`${held}\n]}\n`);
}

/** To the digits of the tables; null where there is no value. */
const rounded = (value: number | undefined): number | null =>
  value === undefined || !Number.isFinite(value) ? null : Number(value.toPrecision(12)) + 0;
