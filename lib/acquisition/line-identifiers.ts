/** Names that tell lines apart: an identifier met again becomes id.1, id.2 … */

export interface Identified {
  /** One a line, all different. */
  readonly ids: readonly string[];
  /** Identifiers that several lines had. */
  readonly repeated: readonly string[];
}

/** @param names one a line, in the order of the files; undefined lines are counted: 1, 2 … */
export function identify(names: readonly (string | undefined)[]): Identified {
  const counts = new Map<string, number>();
  for (const name of names) if (name !== undefined) counts.set(name, (counts.get(name) ?? 0) + 1);
  // A number may not make a name that the file already has.
  const used = new Set([...counts].filter(([, count]) => count === 1).map(([name]) => name));
  const next = new Map<string, number>();
  const fresh = (base: string, shape: (n: number) => string): string => {
    let n = next.get(base) ?? 1;
    while (used.has(shape(n))) ++n;
    next.set(base, n + 1);
    used.add(shape(n));
    return shape(n);
  };
  const ids = names.map((name) => {
    if (name === undefined) return fresh("", String);
    return counts.get(name) === 1 ? name : fresh(name, (n) => `${name}.${n}`);
  });
  return {ids, repeated: [...counts].filter(([, count]) => count > 1).map(([name]) => name)};
}
