/** What lines of one geometry share, whatever they read. A process makes one, and results do not depend on what is in it. */
import {type IntervalStore, intervalStore} from "../inverse/interval-store.ts";
import {type LevelSystems, levelSystems} from "../solvers/level-systems.ts";

export interface SharedGeometry {
  readonly systems: LevelSystems;
  readonly intervals: IntervalStore;
}

export const sharedGeometry = (): SharedGeometry => ({systems: levelSystems(), intervals: intervalStore()});
