/** Keeps the last few things made, by key. */
export function recent<Key, Value>(most: number): (key: Key, make: () => Value) => Value {
  const kept = new Map<Key, Value>();
  return (key, make) => {
    const found = kept.get(key) ?? make();
    // Asked for again, it is the youngest.
    kept.delete(key);
    kept.set(key, found);
    if (kept.size > most) kept.delete(kept.keys().next().value as Key);
    return found;
  };
}
