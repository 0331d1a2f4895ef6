/** Lets work in together, but what is suspected of ending the process by itself: then a death has one cause. */

export interface Gate {
  together<T>(work: () => Promise<T>): Promise<T>;
  alone<T>(work: () => Promise<T>): Promise<T>;
}

export function openGate(): Gate {
  const inside = new Set<Promise<unknown>>();
  /** The end of the last one that goes alone. */
  let closed: Promise<unknown> = Promise.resolve();
  const settled = (work: Promise<unknown>): Promise<unknown> => work.catch(() => undefined);
  return {
    async together(work) {
      for (let seen: unknown; seen !== closed; ) {
        seen = closed;
        await closed;
      }
      const running = work();
      const end = settled(running);
      inside.add(end);
      try {
        return await running;
      } finally {
        inside.delete(end);
      }
    },
    alone(work) {
      const before = closed;
      const running = (async () => {
        await before;
        await Promise.all(inside);
        return work();
      })();
      closed = settled(running);
      return running;
    },
  };
}
