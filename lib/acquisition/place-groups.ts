/** The axis of each group of lines, in metres of its frame; its zero is set once every station was seen. */
import {doubt, type Notice} from "../notice.ts";
import {type Chord, directionGroups, meanAzimuth} from "../survey/direction-groups.ts";
import {type LineAxis, lineAxis} from "../survey/line-axis.ts";
import type {Frame, Frames} from "./frames.ts";
import type {Coordinates, RunSummary} from "./survey-scan.ts";

export interface PlacedGroup {
  readonly name: string;
  readonly frame: Frame;
  /** Through the middle of the lines' ends. */
  readonly axis: LineAxis;
  readonly lines: number;
}

export interface Placement {
  readonly groups: readonly PlacedGroup[];
  /** Position in `groups`, one a run. */
  readonly groupOf: Int32Array;
  readonly notices: readonly Notice[];
}

/** Scale error of a group's own projection that is worth a doubt. */
const DOUBTFUL_SCALE = 1e-3;

type Ends = readonly [Coordinates, Coordinates];

const chordIn = (frame: Frame, ends: Ends | undefined): Chord => {
  if (ends === undefined) return {dx: 0, dy: 0};
  const [from, to] = ends.map(([a, b]) => frame.metric(a, b));
  return {dx: to![0] - from![0], dy: to![1] - from![1]};
};

/** @param runs at least one with `ends` */
export function placeGroups(runs: readonly RunSummary[], frames: Frames): Placement {
  const found = directionGroups(runs.map(({ends}) => chordIn(frames.first, ends)));
  const groupOf = new Int32Array(runs.length);
  const notices: Notice[] = [];
  const groups = found.map((group, g): PlacedGroup => {
    for (const member of group.members) groupOf[member] = g;
    const pairs = group.members.flatMap((member) => runs[member]!.ends ?? []) as Coordinates[];
    let frame = frames.common;
    let azimuth = group.azimuth;
    if (frame === undefined) {
      // The direction is that at the middle of the group, where its own map has its north.
      azimuth = azimuthIn(frames.around(pairs), runs, group.members);
      const own = frames.along(pairs, azimuth);
      frame = own.frame;
      azimuth = azimuthIn(frame, runs, group.members);
      if (!(own.scaleError <= DOUBTFUL_SCALE))
        notices.push(
          doubt(
            "crs/scale",
            `Group ${group.name} is too wide for one map: distances on its outer lines are up to ${(100 * own.scaleError).toPrecision(2)} % off. Split the survey into blocks.`,
          ),
        );
    }
    let [x, y] = [0, 0];
    for (const [a, b] of pairs) {
      const [px, py] = frame.metric(a, b);
      x += px / pairs.length;
      y += py / pairs.length;
    }
    return {name: group.name, frame, axis: lineAxis(azimuth, [x, y]), lines: group.members.length};
  });
  return {groups, groupOf, notices};
}

const azimuthIn = (frame: Frame, runs: readonly RunSummary[], members: readonly number[]): number =>
  meanAzimuth(members.map((member) => chordIn(frame, runs[member]!.ends)));
