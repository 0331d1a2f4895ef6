/** What a share of so many draws says of the probability behind it. */

/**
 * Exact limits of a probability from `successes` in `trials`: outside them so few, or so many, would be seen with less
 * than half of 1 − confidence.
 * Source: Clopper & Pearson, Biometrika 26 (1934) 404 (from memory).
 */
export function binomialLimits(
  successes: number,
  trials: number,
  confidence: number,
): {readonly lower: number; readonly upper: number} {
  const tail = 0.5 * (1 - confidence);
  return {
    lower: successes === 0 ? 0 : crossing((p) => tailFrom(successes, trials, p) - tail),
    upper: successes === trials ? 1 : crossing((p) => tail - (1 - tailFrom(successes + 1, trials, p))),
  };
}

/** P(at least `least` of `trials`) at probability p, summed from its smallest terms. */
function tailFrom(least: number, trials: number, p: number): number {
  if (p === 0) return 0;
  if (p === 1) return 1;
  const odds = Math.log(p) - Math.log1p(-p);
  // ln of the term at 0, then upward by the ratio of neighbours: no factorials.
  let log = trials * Math.log1p(-p);
  const terms: number[] = [];
  for (let k = 0; k <= trials; ++k) {
    if (k >= least) terms.push(Math.exp(log));
    log += odds + Math.log((trials - k) / (k + 1));
  }
  return Math.min(
    1,
    terms.sort((a, b) => a - b).reduce((sum, term) => sum + term, 0),
  );
}

/** Where an increasing function of p in [0, 1] crosses zero, by bisection to the last bits. */
function crossing(f: (p: number) => number): number {
  let low = 0;
  let high = 1;
  for (let step = 0; step < 60; ++step) {
    const middle = 0.5 * (low + high);
    if (f(middle) < 0) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}
