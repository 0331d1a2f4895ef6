/**
 * The systems of level lines, and of each what it holds at the multipliers that all its lines ask for: readings take no
 * part in them. What is kept would come out in the same bits again, so that no answer depends on which line came first.
 */
import {recent} from "../numeric/recent.ts";
import {levelCells, levelLine} from "../operators/level-cells.ts";
import type {Panels} from "../operators/panels.ts";
import type {Readings} from "../operators/readings.ts";
import {regionalBasis} from "../operators/regional.ts";
import {isFewMultiplier} from "./few-multipliers.ts";
import {type AtMultiplier, type LevelSystem, levelSystem} from "./level-system.ts";

/** Geometries kept at a time, and bytes that each may hold at its multipliers: 2,000 stations take 30 MB. Heuristics. */
const KEPT = 2;
const ROOM = 64e6;

export interface LevelSystems {
  /**
   * The system of readings whose noise is one unit, SI.
   * @param readings in increasing chainage; their noise is not looked at
   * @param degree of the regional, −1 for none
   * @returns undefined where `levelCells` does not serve them
   */
  of(readings: Readings, panels: Panels, degree: number): LevelSystem | undefined;
}

export function levelSystems(): LevelSystems {
  const kept = recent<string, {readonly x: Float64Array; readonly system: LevelSystem | undefined}>(KEPT);
  return {
    of(readings, panels, degree) {
      const line = panels.flat ? levelLine(readings) : undefined;
      if (line === undefined) return undefined;
      const {x, aRe, aIm, order} = readings;
      const make = (): LevelSystem | undefined => systemOf(readings, panels, degree);
      const zone = panels.components.flatMap(({interval}) => [interval.from, interval.to]);
      const widest = panels.width.reduce((most, width) => Math.max(most, width), 0);
      const key = [readings.count, ...Object.values(line), aRe[0], aIm[0], order[0], degree, widest, ...zone].join();
      const found = kept(key, () => {
        const system = make();
        return {x: Float64Array.from(x), system: system && keeping(system)};
      });
      // Stations may stray by less than matters to the cells, but the regional sees it.
      return found.x.every((own, i) => own === x[i]) ? found.system : make();
    },
  };
}

/** @see LevelSystems.of */
export function systemOf(readings: Readings, panels: Panels, degree: number): LevelSystem | undefined {
  const unit = {...readings, noise: new Float64Array(readings.count).fill(1)};
  const cells = levelCells(unit, panels);
  return cells && levelSystem(cells, regionalBasis(unit, degree));
}

function keeping(system: LevelSystem): LevelSystem {
  const kept = new Map<number, AtMultiplier>();
  let room = ROOM;
  return {
    ...system,
    at(alpha) {
      const found = kept.get(alpha) ?? system.at(alpha);
      if (!kept.has(alpha) && isFewMultiplier(alpha, system.largest) && found.held <= room) {
        kept.set(alpha, found);
        room -= found.held;
      }
      return found;
    },
  };
}
