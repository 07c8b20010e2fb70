/** The candidate that a word was probably meant to be, or undefined where none is close. Case counts a little, letters more. */
export function nearest(word: string, candidates: Iterable<string>): string | undefined {
  let best: string | undefined;
  let least = word.length <= 2 ? 1 : word.length <= 5 ? 1.5 : word.length <= 8 ? 2.5 : 3;
  for (const candidate of candidates) {
    const far = distance(word, candidate);
    if (far < least || (far === least && best === undefined)) {
      least = far;
      best = candidate;
    }
  }
  return best;
}

/** Optimal string alignment: edits and neighbours swapped count 1, a change of case 0.2 (Damerau 1964). */
function distance(a: string, b: string): number {
  if (Math.abs(a.length - b.length) > 3) return Number.POSITIVE_INFINITY;
  let before: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      let cost = Math.min(last[j] + 1, row[j - 1] + 1, last[j - 1] + change(a[i - 1], b[j - 1]));
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) cost = Math.min(cost, before[j - 2] + 1);
      row.push(cost);
    }
    before = last;
    last = row;
  }
  return last[b.length];
}

const change = (x: string, y: string): number => (x === y ? 0 : x.toLowerCase() === y.toLowerCase() ? 0.2 : 1);
