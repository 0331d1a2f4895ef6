/** How far the work is: one line that rewrites itself on a terminal, a few plain lines elsewhere. */
import type {Host} from "./nouns.ts";
import {printable} from "./printable.ts";

const REDRAW_MS = 100;
/** Up to so many lines each is told where nothing can be rewritten; beyond, every quarter. */
const EACH = 4;

export interface Progress {
  /** One more is finished. */
  step(id: string): void;
  /** Clears the line. */
  end(): void;
}

/** @param noun what is counted, in the plural: `lines` */
export function progressOf(host: Host, total: number, noun: string, silent: boolean): Progress {
  let done = 0;
  if (silent) return {step: () => undefined, end: () => undefined};
  if (!host.err.isTerminal)
    return {
      step: (id) => {
        done++;
        const quarter = Math.floor((4 * done) / total) > Math.floor((4 * (done - 1)) / total);
        if (total <= EACH) host.err.write(`${done} of ${total} ${noun}: ${printable(id, 40)}\n`);
        else if (quarter) host.err.write(`${done} of ${total} ${noun}\n`);
      },
      end: () => undefined,
    };
  let drawn = Number.NEGATIVE_INFINITY;
  return {
    step: (id) => {
      done++;
      if (host.now() - drawn < REDRAW_MS) return;
      drawn = host.now();
      host.err.write(`\r\u001b[2K${done} of ${total} ${noun} · ${printable(id, 40).replaceAll("\n", " ")}`);
    },
    end: () => host.err.write("\r\u001b[2K"),
  };
}
