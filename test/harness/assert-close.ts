/** Comparisons whose tolerance is an argument with a reason. */
import {AssertionError} from "node:assert";

const EPSILON = 2 ** -52;

export interface Closeness {
  /** The tolerance is factor × ε × |scale|. */
  readonly factor: number;
  readonly scale: number;
  /** Why that tolerance: an error analysis, the digits of a table. */
  readonly because: string;
}

/** Fails unless |got − want| ≤ factor × ε × |scale|; says how many ε × scale it is off. NaN always fails. */
export function assertClose(got: number, want: number, {factor, scale, because}: Closeness): void {
  const unit = EPSILON * Math.abs(scale);
  const off = Math.abs(got - want);
  if (!(off <= factor * unit)) {
    throw new AssertionError({
      message: `got ${got}, want ${want}: off by ${off.toExponential(2)} = ${(off / unit).toPrecision(3)} ε × ${scale}, allowed ${factor} (${because})`,
      actual: got,
      expected: want,
      operator: "assertClose",
      stackStartFn: assertClose,
    });
  }
}

/** Fails unless |got − want| ≤ tolerance, a number in the unit of both. NaN always fails. */
export function absoluteClose(got: number, want: number, tolerance: number, because: string): void {
  const off = Math.abs(got - want);
  if (!(off <= tolerance)) {
    throw new AssertionError({
      message: `got ${got}, want ${want}: off by ${off.toExponential(2)}, allowed ${tolerance} (${because})`,
      actual: got,
      expected: want,
      operator: "absoluteClose",
      stackStartFn: absoluteClose,
    });
  }
}
