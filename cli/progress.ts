/** How far the work is, how fast, and how long it will take: one line that rewrites itself on a terminal, a few plain lines elsewhere. */
import type {Host} from "./nouns.ts";
import {printable} from "./printable.ts";

const REDRAW_MS = 100;
/** Up to so many lines each is told where nothing can be rewritten; beyond, every quarter or when so much time went by. */
const EACH = 4;
const SHARE = 4;
const SILENCE_MS = 10_000;
/**
 * The time of the first step holds what is done once, so that rates count from its end; none is told before so many
 * more steps, from less time, or from less than this part of what the first step took: steps that are taken by several
 * at once end together (heuristics).
 */
const RATE_STEPS = 3;
const RATE_MS = 2000;
const RATE_SHARE = 1 / 4;
/** Lines differ along a survey: a rate is that of the last so many steps and so much time, up to twice both. */
const RECENT_STEPS = 100;
const RECENT_MS = 10_000;

export interface Progress {
  /** One more is finished. */
  step(id: string): void;
  /** Clears the line. */
  end(): void;
}

/** @param noun what is counted, in the plural: `lines` */
export function progressOf(host: Host, total: number, noun: string, silent: boolean): Progress {
  if (silent) return {step: () => undefined, end: () => undefined};
  const started = host.now();
  let done = 0;
  let told = host.err.isTerminal ? Number.NEGATIVE_INFINITY : started;
  const pace = paceFrom(started);
  const speed = (now: number): string => {
    const rate = done === total ? undefined : pace.rate(now);
    return rate === undefined ? "" : `, ${rateText(1000 * rate)}, ${timeText((total - done) / rate / 1000)} left`;
  };
  if (!host.err.isTerminal)
    return {
      step: (id) => {
        const now = host.now();
        done++;
        pace.step(now);
        const share = Math.floor((SHARE * done) / total) > Math.floor((SHARE * (done - 1)) / total);
        if (total > EACH && !share && now - told < SILENCE_MS) return;
        told = now;
        host.err.write(`${done} of ${total} ${noun}${total <= EACH ? `: ${printable(id, 40)}` : speed(now)}\n`);
      },
      end: () => undefined,
    };
  return {
    step: (id) => {
      const now = host.now();
      done++;
      pace.step(now);
      if (now - told < REDRAW_MS) return;
      told = now;
      host.err.write(
        `\r\u001b[2K${done} of ${total} ${noun}${speed(now)} · ${printable(id, 40).replaceAll("\n", " ")}`,
      );
    },
    end: () => host.err.write("\r\u001b[2K"),
  };
}

/** How fast the latest steps were. */
function paceFrom(started: number): {step(now: number): void; rate(now: number): number | undefined} {
  let done = 0;
  let first = {done: 0, at: started};
  let since = first;
  let next = first;
  return {
    step(now) {
      done++;
      if (done === 1) first = since = next = {done, at: now};
      else if (done - next.done >= RECENT_STEPS && now - next.at >= RECENT_MS) {
        since = next;
        next = {done, at: now};
      }
    },
    /** Steps a millisecond; undefined as long as too little is known. */
    rate(now) {
      if (done - first.done < RATE_STEPS) return undefined;
      if (!(now - first.at >= Math.max(RATE_MS, RATE_SHARE * (first.at - started)))) return undefined;
      return (done - since.done) / (now - since.at);
    },
  };
}

/** Of so many a second. */
const rateText = (rate: number): string =>
  rate >= 1
    ? `${rate.toPrecision(2)} a second`
    : rate >= 1 / 60
      ? `${(60 * rate).toPrecision(2)} a minute`
      : `${(3600 * rate).toPrecision(2)} an hour`;

const timeText = (seconds: number): string =>
  seconds < 90
    ? `${Math.ceil(seconds)} s`
    : seconds < 5400
      ? `${Math.ceil(seconds / 60)} min`
      : `${(seconds / 3600).toFixed(1)} h`;
