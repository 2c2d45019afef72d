/** "Did you mean": the one known word that a mistyped one is nearest to. */
const MOST_EDITS = 3;

/** The nearest of `words`, or undefined when none is near: one edit for every four letters, at most three. */
export function closestWord(typed: string, words: readonly string[]): string | undefined {
  if (typed.length > 60) return undefined;
  let best: string | undefined;
  let fewest = Math.min(MOST_EDITS, Math.max(1, Math.floor(typed.length / 4))) + 1;
  for (const word of words) {
    const edits = Math.min(editsBetween(plain(typed), plain(word)), editsBetween(plain(typed), plain(stem(word))));
    if (edits < fewest) {
      best = word;
      fewest = edits;
    }
  }
  return best;
}

/** The name without the unit at its end: `maxGust` of `maxGustMps`. */
function stem(word: string): string {
  return word.replace(/(?:Mps|Deg|Pct|Hpa|Jkg|Kg|Mm|Min|Wm2|M|C)$/, '');
}

/** Case, blanks, hyphens and underscores are not what a mistyped name is about. */
function plain(word: string): string {
  return word.toLowerCase().replace(/[\s_-]/g, '');
}

/** Damerau's distance with adjacent swaps (optimal string alignment). */
function editsBetween(a: string, b: string): number {
  let beforeLast: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i += 1) {
    const row = [i];
    for (let j = 1; j <= b.length; j += 1) {
      const isSame = a[i - 1] === b[j - 1];
      let edits = Math.min((last[j] ?? 0) + 1, (row[j - 1] ?? 0) + 1, (last[j - 1] ?? 0) + (isSame ? 0 : 1));
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) edits = Math.min(edits, (beforeLast[j - 2] ?? 0) + 1);
      row.push(edits);
    }
    beforeLast = last;
    last = row;
  }
  return last[b.length] ?? 0;
}
