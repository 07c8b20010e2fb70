/**
 * What reactions leave alone, as a choice of species: those that move freely, and how each of the others follows from them.
 * Whatever reacts, c[dependent j] changes by the sum over k of follows[j * free.length + k] times the change of c[free k].
 */
export interface Conserved {
  readonly free: Int32Array;
  readonly dependent: Int32Array;
  /** dependent.length x free.length, row-major. */
  readonly follows: Float64Array;
}

/**
 * Reduces stoichiometric numbers to their row space by elimination with full pivoting, reactants before products: what runs
 * out is then kept to its own digits.
 * @param numbers one row per reaction, one column per component, in the measure of the concentrations to be followed
 * @param species components that come before others; a temperature behind them follows from them where it can
 */
export function conservedBy(numbers: readonly Float64Array[], size: number, species = size): Conserved {
  const rows = numbers.map((row) => row.slice());
  const consumed = Uint8Array.from({ length: size }, (_, i) => (i < species && rows.some((row) => row[i] < 0) ? 1 : 0));
  // Measures of species lie decades apart (counts and grams): what is nothing is told against its own column and row.
  const columns = Float64Array.from({ length: size }, (_, i) => Math.max(...rows.map((row) => Math.abs(row[i])), 0));
  const share = (x: number, i: number): number => (columns[i] > 0 ? Math.abs(x) / columns[i] : 0);
  const weights = rows.map((row) => Math.max(...row.map((x, i) => share(x, i)), 0));
  const isSome = (r: number, i: number): boolean => share(rows[r][i], i) > 1e-9 * weights[r];
  const free: number[] = [];
  for (let rank = 0; rank < rows.length; rank++) {
    const among = (may: (i: number) => boolean) =>
      pivotOf(rows, rank, (r, i) => may(i) && !free.includes(i) && isSome(r, i));
    const found = among((i) => consumed[i] === 1) ?? among((i) => i < species) ?? among(() => true);
    if (!found) break;
    [rows[rank], rows[found.row]] = [rows[found.row], rows[rank]];
    [weights[rank], weights[found.row]] = [weights[found.row], weights[rank]];
    const head = rows[rank][found.column];
    rows[rank] = rows[rank].map((x) => x / head);
    rows.forEach((row, r) => {
      const factor = row[found.column];
      if (r !== rank && factor !== 0) for (let i = 0; i < size; i++) row[i] -= factor * rows[rank][i];
    });
    free.push(found.column);
  }
  const dependent = Array.from({ length: size }, (_, i) => i).filter((i) => !free.includes(i));
  const follows = new Float64Array(dependent.length * free.length);
  dependent.forEach((d, j) => {
    for (let k = 0; k < free.length; k++) {
      const x = rows[k][d];
      follows[j * free.length + k] = share(x, d) * columns[free[k]] > 1e-12 ? x : 0;
    }
  });
  return { free: Int32Array.from(free), dependent: Int32Array.from(dependent), follows };
}

function pivotOf(
  rows: readonly Float64Array[],
  from: number,
  may: (row: number, column: number) => boolean,
): { row: number; column: number } | undefined {
  let best: { row: number; column: number } | undefined;
  let size = 0;
  for (let r = from; r < rows.length; r++) {
    rows[r].forEach((x, column) => {
      if (Math.abs(x) > size && may(r, column)) {
        size = Math.abs(x);
        best = { row: r, column };
      }
    });
  }
  return best;
}

/**
 * How far sums that no reaction changes differ between what is fed and what left, as a share of what they are made of: the
 * largest over all of them; 0 where every species is changed freely.
 */
export function imbalance({ free, dependent, follows }: Conserved, fed: Float64Array, left: Float64Array): number {
  let worst = 0;
  dependent.forEach((d, j) => {
    let sum = fed[d] - left[d];
    let size = Math.max(fed[d], left[d]);
    free.forEach((f, k) => {
      const weight = follows[j * free.length + k];
      sum -= weight * (fed[f] - left[f]);
      size += Math.abs(weight) * Math.max(fed[f], left[f]);
    });
    if (size > 0) worst = Math.max(worst, Math.abs(sum) / size);
  });
  return worst;
}
