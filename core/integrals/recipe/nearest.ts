/** The candidate with the fewest single-letter edits from `word`, or null where none is near. */
export function nearest(word: string, candidates: readonly string[]): string | null {
  if (word.length > 100) return null;
  let best: string | null = null;
  let bestDistance = Math.max(2, Math.ceil(word.length / 2)) + 1;
  for (const candidate of candidates) {
    const distance = editDistance(word.toLowerCase(), candidate.toLowerCase());
    // Words that share no letter are not near, however short.
    if (distance < bestDistance && distance < Math.min(word.length, candidate.length)) {
      best = candidate;
      bestDistance = distance;
    }
  }
  return best;
}

/** Levenshtein distance. */
function editDistance(a: string, b: string): number {
  let previous = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const substitute = previous[j - 1]! + (a[i - 1] === b[j - 1] ? 0 : 1);
      row.push(Math.min(substitute, previous[j]! + 1, row[j - 1]! + 1));
    }
    previous = row;
  }
  return previous[b.length]!;
}
