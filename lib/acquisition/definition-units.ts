/** Units as definition files spell them → the spelling used here. Spellings seen in deliveries (common practice, no source). */

/** Without blanks, points, asterisks and carets, in lower case, µ as u. */
const SPELLINGS: Readonly<Record<string, readonly string[]>> = {
  mGal: ["mgal", "mgals", "milligal", "milligals"],
  uGal: ["ugal", "ugals", "microgal", "microgals"],
  "um/s2": ["um/s2", "um/sec2", "um/s/s", "um/sec/sec", "ums-2", "umsec-2", "micrometrespersecondsquared"],
  gu: ["gu", "gravityunit", "gravityunits"],
  nT: ["nt", "nanotesla", "nanoteslas", "gamma", "gammas"],
  pT: ["pt", "picotesla", "picoteslas"],
  "nT/m": ["nt/m", "nt/metre", "nt/meter"],
  "pT/m": ["pt/m", "pt/metre", "pt/meter"],
  E: ["e", "eo", "eu", "eotvos", "eötvös"],
  m: ["m", "metre", "metres", "meter", "meters"],
  deg: ["deg", "degs", "degree", "degrees", "dega", "dd", "decimaldegrees", "degreesofarc"],
  ft: ["ft", "feet", "foot", "usft", "ussurveyfeet"],
  km: ["km", "kilometre", "kilometres", "kilometer", "kilometers"],
};

/** Undefined for a unit that is not known here. */
export function definedUnit(text: string): string | undefined {
  const plain = text
    .toLowerCase()
    .replaceAll(/[\s.*^·()]/g, "")
    .replaceAll(/[µμ]/g, "u");
  return Object.keys(SPELLINGS).find((unit) => SPELLINGS[unit]!.includes(plain));
}
