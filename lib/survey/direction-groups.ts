/**
 * Which lines share an axis: lines within 20° of a mean direction form a group.
 *
 * Directions are axial: a line and its reverse are one direction. The mean is that of
 * the doubled angles, weighted by length (Mardia & Jupp, Directional Statistics, 2000, §1.1
 * and §9.4, from memory), so that reversing a line changes no bit of it.
 */

/** A line's straight run from one end to the other, m; {0, 0} when it has none. */
export interface Chord {
  readonly dx: number;
  readonly dy: number;
}

export interface DirectionGroup {
  /** G1, G2 …: by total length, the longest first; among equals the one met first. */
  readonly name: string;
  /** Degrees clockwise from grid north, in [0, 180). */
  readonly azimuth: number;
  /** Positions in the list of chords, increasing. */
  readonly members: readonly number[];
  /** Sum of the lengths, m. */
  readonly length: number;
}

/** Degrees off the mean beyond which a line is of another group (contract). */
const GROUP_TOLERANCE = 20;

const DEGREES = 180 / Math.PI;

const length = ({dx, dy}: Chord): number => Math.hypot(dx, dy);

/** Degrees clockwise from north, in [0, 180). */
export const foldedAzimuth = ({dx, dy}: Chord): number => fold(Math.atan2(dx, dy) * DEGREES);

const fold = (azimuth: number): number => {
  const folded = azimuth % 180;
  return folded < 0 ? folded + 180 : folded;
};

/** The angle between two axes, in [0, 90]. */
export const axialDifference = (a: number, b: number): number => {
  const difference = Math.abs(fold(a) - fold(b));
  return Math.min(difference, 180 - difference);
};

/**
 * Mean direction of chords, degrees in [0, 180). It is rounded to a millionth of a degree
 * (2e-8 of a length), so that the order of the lines in the file cannot reach the result.
 */
export function meanAzimuth(chords: readonly Chord[]): number {
  let sine = 0;
  let cosine = 0;
  for (const chord of chords) {
    const size = length(chord);
    if (!(size > 0)) continue;
    sine += (2 * chord.dx * chord.dy) / size;
    cosine += (chord.dy * chord.dy - chord.dx * chord.dx) / size;
  }
  const azimuth = Math.round(fold((Math.atan2(sine, cosine) * DEGREES) / 2) * 1e6) / 1e6;
  return azimuth >= 180 ? azimuth - 180 : azimuth;
}

/**
 * Every chord in exactly one group; a chord without length goes to the first.
 *
 * The first group is sought about the direction with the most line near it: lines within 20° of
 * their median direction, less those more than 20° off the mean. The rest follow alike. The median
 * comes first because one oblique transit line would turn the mean of many, and with it their axis.
 */
export function directionGroups(chords: readonly Chord[]): DirectionGroup[] {
  let left = chords.map((_, i) => i).filter((i) => length(chords[i]!) > 0);
  const found: {azimuth: number; members: number[]; length: number}[] = [];
  while (left.length > 0) {
    const members = gather(chords, left);
    const own = members.map((i) => chords[i]!);
    found.push({azimuth: meanAzimuth(own), members, length: own.reduce((sum, chord) => sum + length(chord), 0)});
    const taken = new Set(members);
    left = left.filter((i) => !taken.has(i));
  }
  found.sort((a, b) => b.length - a.length || a.members[0]! - b.members[0]!);
  const still = chords.map((_, i) => i).filter((i) => !(length(chords[i]!) > 0));
  if (found.length === 0) found.push({azimuth: 0, members: [], length: 0});
  found[0]!.members.push(...still);
  return found.map((group, i) => ({...group, name: `G${i + 1}`, members: group.members.toSorted((a, b) => a - b)}));
}

function gather(chords: readonly Chord[], candidates: readonly number[]): number[] {
  const near = (azimuth: number, among: readonly number[]) =>
    among.filter((i) => axialDifference(foldedAzimuth(chords[i]!), azimuth) <= GROUP_TOLERANCE);
  const seed = near(densestDirection(candidates.map((i) => chords[i]!)), candidates);
  if (seed.length === 0) return [longest(chords, candidates)];
  let members = near(medianAzimuth(seed.map((i) => chords[i]!)), candidates);
  for (;;) {
    const kept = near(meanAzimuth(members.map((i) => chords[i]!)), members);
    if (kept.length === 0) return [longest(chords, candidates)];
    if (kept.length === members.length) return members;
    members = kept;
  }
}

/** The direction with half of the length on either side, among chords that lie within less than 90° of each other. */
function medianAzimuth(chords: readonly Chord[]): number {
  const reference = foldedAzimuth(chords[0]!);
  const turned = chords
    .map((chord) => ({turn: fold(foldedAzimuth(chord) - reference + 90) - 90, size: length(chord)}))
    .sort((a, b) => a.turn - b.turn);
  const half = turned.reduce((sum, {size}) => sum + size, 0) / 2;
  let passed = 0;
  for (const {turn, size} of turned) {
    passed += size;
    if (passed >= half * (1 - 1e-12)) return fold(reference + turn);
  }
  return reference;
}

const longest = (chords: readonly Chord[], candidates: readonly number[]): number =>
  candidates.reduce((best, i) => (length(chords[i]!) > length(chords[best]!) ? i : best), candidates[0]!);

/**
 * The whole degree with the most length of line about it; the least such degree. One degree less
 * than the tolerance is looked at, so that lines counted by their whole degree do lie within it.
 */
function densestDirection(chords: readonly Chord[]): number {
  const weight = new Float64Array(180);
  for (const chord of chords) weight[Math.round(foldedAzimuth(chord)) % 180]! += length(chord);
  let best = 0;
  let most = -1;
  for (let centre = 0; centre < 180; ++centre) {
    let sum = 0;
    for (let off = 1 - GROUP_TOLERANCE; off < GROUP_TOLERANCE; ++off) sum += weight[(centre + off + 180) % 180]!;
    // A later degree must be better by more than rounding, or the middle of a plateau would depend on it.
    if (sum > most * (1 + 1e-12)) {
      most = sum;
      best = centre;
    }
  }
  return best;
}
