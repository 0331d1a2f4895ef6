/** What is made when it is first asked for, and kept. */
export function lazily<T>(make: () => T): () => T {
  let made: {readonly value: T} | undefined;
  return () => {
    made ??= {value: make()};
    return made.value;
  };
}

type Makers<Later> = {readonly [Key in keyof Later]: () => Later[Key]};

/** An object with the properties of `base`, and with further ones that are made when first read, and kept; a spread makes all. */
export function withLater<Base extends object, Later extends object>(base: Base, later: Makers<Later>): Base & Later {
  const all = {...base};
  for (const [key, make] of Object.entries<() => unknown>(later))
    Object.defineProperty(all, key, {enumerable: true, configurable: true, get: lazily(make)});
  return all as Base & Later;
}

/** `base` with some of its properties replaced; of either, nothing is made now that is made when it is read. */
export const replacing = <Base extends object>(base: Base, by: Partial<Base>): Base =>
  Object.defineProperties(Object.defineProperties({}, Object.getOwnPropertyDescriptors(base)), {
    ...Object.getOwnPropertyDescriptors(by),
  }) as Base;
