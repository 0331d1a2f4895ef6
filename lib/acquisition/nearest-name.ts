/** The known name that a mistyped one most likely meant. */

/** Insertions, deletions and replacements from one text to the other (Levenshtein's distance), letters' case aside. */
function editDistance(a: string, b: string): number {
  const [from, to] = [a.toLowerCase(), b.toLowerCase()];
  let above = Array.from({length: to.length + 1}, (_, j) => j);
  for (let i = 1; i <= from.length; ++i) {
    const row = [i];
    for (let j = 1; j <= to.length; ++j)
      row.push(Math.min(above[j]! + 1, row[j - 1]! + 1, above[j - 1]! + (from[i - 1] === to[j - 1] ? 0 : 1)));
    above = row;
  }
  return above[to.length]!;
}

/** Undefined when there is no name to choose from. Among equals the first. */
export function nearestName(name: string, known: readonly string[]): string | undefined {
  // A cell of megabytes can become a name; a name is told by its first letters.
  const start = name.slice(0, 80);
  let best: string | undefined;
  let least = Infinity;
  for (const candidate of known) {
    const distance = editDistance(start, candidate.slice(0, 80));
    if (distance < least) {
      least = distance;
      best = candidate;
    }
  }
  return best;
}
