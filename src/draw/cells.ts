/** Least width of one small plot among several, px. */
const least = 172;

/** As many columns of small plots as fit into so many px, all of one width. */
export function columnsFor(width: number): { readonly columns: number; readonly cellWidth: number } {
  const columns = Math.max(1, Math.floor(width / least));
  return { columns, cellWidth: width / columns };
}

/** The ends of all values and a margin beyond them, a share of what lies between. */
export function withMargin(values: readonly number[], share = 0.15): readonly [number, number] {
  const known = values.filter(Number.isFinite);
  if (known.length === 0) return [0, 1];
  const [low, high] = [Math.min(...known), Math.max(...known)];
  return [low - share * (high - low), high + share * (high - low)];
}
