/**
 * A bounded choice out of a stream of lines: all while they are few; beyond the limit the
 * gravest and an even sample, so that a survey of any size makes a page of one size.
 */

export interface Selection<T> {
  /**
   * Offers the entry of line `index`, counted from 0 in the order of the survey.
   * @param gravity 0 for a line like any other; the greater, the sooner it is kept
   * @param make called only when the entry is kept for now
   */
  offer(index: number, gravity: number, make: () => T): void;
  /** What is kept, in the order of the survey. */
  kept(): readonly T[];
  /** Entries offered in all. */
  offered(): number;
}

interface Entry<T> {
  readonly index: number;
  readonly gravity: number;
  readonly item: T;
}

/**
 * @param total lines expected
 * @param limit entries kept at most
 */
export function selection<T>(total: number, limit: number): Selection<T> {
  const all = total <= limit;
  const sampled = all ? limit : Math.ceil(limit / 2);
  const worstRoom = limit - sampled;
  const inSample = (index: number): boolean =>
    all || Math.floor(((index + 1) * sampled) / total) > Math.floor((index * sampled) / total);
  const sample: Entry<T>[] = [];
  /** Gravest first; of equals, the earlier line first. */
  const worst: Entry<T>[] = [];
  let offered = 0;
  return {
    offer(index, gravity, make) {
      ++offered;
      if (sample.length < sampled && inSample(index)) {
        sample.push({index, gravity, item: make()});
        return;
      }
      if (!(gravity > 0)) return;
      const rank = worst.findIndex((entry) => entry.gravity < gravity);
      const place = rank < 0 ? worst.length : rank;
      if (place >= worstRoom) return;
      worst.splice(place, 0, {index, gravity, item: make()});
      if (worst.length > worstRoom) worst.pop();
    },
    kept: () => [...sample, ...worst].sort((a, b) => a.index - b.index).map((entry) => entry.item),
    offered: () => offered,
  };
}
