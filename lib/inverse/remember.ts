interface Kept<Key, Value> {
  get(key: Key): Value | undefined;
  set(key: Key, value: Value): unknown;
}

/** What `kept` holds for `key`, made now if it was not asked for before. */
export function remember<Key, Value>(kept: Kept<Key, Value>, key: Key, make: () => Value): Value {
  const found = kept.get(key);
  if (found !== undefined) return found;
  const made = make();
  kept.set(key, made);
  return made;
}
