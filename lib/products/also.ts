/** Products that are written only when asked for, in words that an option can take; light, since help texts read it. */
export const ALSO = [
  {word: "gdf2", help: "gdf2: levels.dfn and levels.dat, the rows of levels.csv as an ASEG-GDF2 pair"},
] as const;

export type AlsoWord = (typeof ALSO)[number]["word"];
