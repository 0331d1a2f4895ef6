/** How far the work is, how fast, and how long it will take: one line that rewrites itself on a terminal, a few plain lines elsewhere. */
import type {Host} from "./nouns.ts";
import {printable} from "./printable.ts";

const REDRAW_MS = 100;
/** Up to so many lines each is told where nothing can be rewritten; beyond, every quarter or when so much time went by. */
const EACH = 4;
const SHARE = 4;
const SILENCE_MS = 10_000;
/** No rate is told from less time than this. */
const RATE_MS = 2000;

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
  const speed = (now: number): string => {
    const elapsed = now - started;
    if (!(elapsed >= RATE_MS) || done === total) return "";
    return `, ${rateText((1000 * done) / elapsed)}, ${timeText(((total - done) * elapsed) / done / 1000)} left`;
  };
  if (!host.err.isTerminal)
    return {
      step: (id) => {
        const now = host.now();
        done++;
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
      if (now - told < REDRAW_MS) return;
      told = now;
      host.err.write(
        `\r\u001b[2K${done} of ${total} ${noun}${speed(now)} · ${printable(id, 40).replaceAll("\n", " ")}`,
      );
    },
    end: () => host.err.write("\r\u001b[2K"),
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
