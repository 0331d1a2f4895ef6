/** A level in words: `at the boundary`, `10 m above the boundary`, `2 m above the ground`. */
import type {LevelSetting} from "../continuation/level-profile.ts";
import {exactText} from "./number-text.ts";

const SURFACE = {"above-boundary": "the boundary", "above-ground": "the ground"} as const;

export const levelWords = ({kind, height}: LevelSetting): string =>
  height === 0 ? `at ${SURFACE[kind]}` : `${exactText(height)} m above ${SURFACE[kind]}`;
