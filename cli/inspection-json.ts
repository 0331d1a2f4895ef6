/** An inspection for scripts: readings in the unit that is named beside them, lengths in metres. */
import {DELIVERY_UNIT} from "../lib/quantities.ts";
import type {Inspection} from "../lib/survey/inspection.ts";
import type {LineFigures} from "../lib/survey/line-figures.ts";
import type {Known} from "./open-for-inspection.ts";

const spreadIn = ({least, median, greatest}: {least: number; median: number; greatest: number}, factor: number) => ({
  least: least / factor,
  median: median / factor,
  greatest: greatest / factor,
});

function channelJson(channel: LineFigures["channels"][number], known: Known) {
  const {role, observable, dimension, noise, noiseMissing, noiseMeaningful} = channel;
  const {symbol, factor} = DELIVERY_UNIT[dimension];
  return {
    role,
    observable: known.observable ? observable : undefined,
    unit: known.observable ? symbol : undefined,
    readings: spreadIn(channel.readings, factor),
    noiseLength: channel.noiseLength,
    noise: noise && {...noise, sigma: noise.sigma / factor},
    noiseMissing,
    noiseMeaningful,
  };
}

/** What is not known is left out: heights and what follows from them, or observable and unit. */
export function inspectionJson(inspection: Inspection, known: Known): Readonly<Record<string, unknown>> {
  const {lines, neighbours} = inspection;
  const unit = DELIVERY_UNIT[lines[0]?.channels[0]?.dimension ?? "field"];
  return {
    ...inspection,
    lines: lines.map(({heights, sampling, channels, ...line}) => ({
      ...line,
      heights: known.heights ? heights : [],
      sampling: known.heights ? sampling : undefined,
      channels: channels.map((channel) => channelJson(channel, known)),
    })),
    neighbours: neighbours && {
      ...neighbours,
      unit: known.observable ? unit.symbol : undefined,
      pairs: neighbours.pairs.map((pair) => ({...pair, difference: pair.difference / unit.factor})),
      heading: {
        ...neighbours.heading,
        opposite: neighbours.heading.opposite / unit.factor,
        sameWay: neighbours.heading.sameWay / unit.factor,
      },
    },
  };
}
