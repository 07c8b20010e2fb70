/**
 * The candidate that a mistyped name most likely meant, or undefined where none is near.
 * Distance after Damerau (Commun. ACM 7 (1964) 171-176), restricted to adjacent transpositions; a change of case costs half.
 * Near: up to a third of the letters, and at most 3.
 */
export function nearest(name: string, candidates: Iterable<string>): string | undefined {
  let best: string | undefined;
  let least = Number.POSITIVE_INFINITY;
  for (const candidate of candidates) {
    if (candidate === name) continue;
    const limit = Math.min(3, Math.max(1, Math.max(name.length, candidate.length) / 3));
    if (Math.abs(name.length - candidate.length) > limit) continue;
    const d = distance(name, candidate);
    if (d <= limit && d < least && d < Math.max(name.length, candidate.length)) {
      least = d;
      best = candidate;
    }
  }
  return best;
}

/** Edits (insert, delete, replace, swap neighbours) from one word to the other. */
export function distance(a: string, b: string): number {
  let before: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      let d = Math.min(last[j] + 1, row[j - 1] + 1, last[j - 1] + replacing(a[i - 1], b[j - 1]));
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) d = Math.min(d, before[j - 2] + 1);
      row.push(d);
    }
    before = last;
    last = row;
  }
  return last[b.length];
}

const replacing = (a: string, b: string): number => (a === b ? 0 : a.toLowerCase() === b.toLowerCase() ? 0.5 : 1);
