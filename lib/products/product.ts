/**
 * A product writes what a study holds; it computes nothing but units.
 * Its bytes go to sinks that the caller opens, so that nothing here touches a disk.
 */
import type {LevelSetting} from "../continuation/level-profile.ts";
import type {IntervalKind} from "../inverse/interval-kind.ts";
import type {Notice} from "../notice.ts";
import type {LevelQuantity} from "../potential/level-quantity.ts";
import type {Observable} from "../potential/observable.ts";
import type {LineOutcome, RowOutcome} from "../study/outcome.ts";
import type {Survey} from "../survey/survey.ts";

/** Receives the bytes of one file in order. */
export interface TextSink {
  write(text: string): Promise<void>;
}

/** What is known before the first line. */
export interface RunFrame {
  readonly survey: Survey;
  readonly observable: Observable;
  readonly levels: readonly LevelSetting[];
  /** What is given on them. */
  readonly quantity: LevelQuantity;
  readonly confidence: number;
  /** Absent: single. */
  readonly intervals?: IntervalKind | undefined;
}

/** A product over survey lines. */
export interface LineProduct {
  begin(frame: RunFrame): Promise<void>;
  line(outcome: LineOutcome): Promise<void>;
  /** @param across doubts about the survey as a whole that only its lines together could tell */
  end(across?: readonly Notice[]): Promise<void>;
}

/** A product over the rows or columns of a grid. */
export interface RowProduct {
  begin(frame: RunFrame): Promise<void>;
  row(outcome: RowOutcome): Promise<void>;
  end(): Promise<void>;
}
