/** What Groundward does not do to readings: it must have been done before, or be of no account. */

export interface Uncorrected {
  readonly name: string;
  readonly method: "gravity" | "magnetic" | "both";
  /** One sentence: what stays in the readings without it. */
  readonly words: string;
}

export const NOT_CORRECTED: readonly Uncorrected[] = [
  {
    name: "daily variation",
    method: "magnetic",
    words:
      "The change of the field with time, from a base station, is not taken off; it looks like a long wave along the line.",
  },
  {
    name: "reference field",
    method: "magnetic",
    words: "The field of the Earth's core is not removed; readings must be anomalies.",
  },
  {
    name: "compensation",
    method: "magnetic",
    words: "The field of the carrier and its manoeuvres is not removed; it follows turns and swings, not the ground.",
  },
  {
    name: "heading",
    method: "magnetic",
    words: "An offset between lines flown in opposite directions is shown by inspect and not removed.",
  },
  {
    name: "lag",
    method: "both",
    words:
      "A reading taken later or elsewhere than its position is not moved; lines flown in opposite directions then disagree along the line.",
  },
  {
    name: "instrument drift",
    method: "gravity",
    words: "The drift of the meter between base readings is not taken off.",
  },
  {
    name: "tides",
    method: "gravity",
    words: "The pull of Moon and Sun, up to some 0.3 mGal in a day, is not taken off.",
  },
  {
    name: "motion",
    method: "gravity",
    words: "Eötvös effect and accelerations of ship, aircraft or drone are not removed.",
  },
  {
    name: "latitude and height",
    method: "gravity",
    words: "Normal gravity, free-air and slab reductions are not made; readings must be anomalies.",
  },
  {
    name: "terrain",
    method: "gravity",
    words: "The attraction of hills and valleys is not taken off; it will be read as sources.",
  },
  {
    name: "levelling",
    method: "both",
    words: "Lines are not shifted to agree with each other or with tie lines; each keeps its own level and slope.",
  },
  {
    name: "filtering",
    method: "both",
    words:
      "Spikes are not removed and nothing is smoothed; smoothing done before makes the noise look smaller than it is.",
  },
];
