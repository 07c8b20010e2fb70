import { closest, type GapSums, type Share, shareOf, sumsByGap } from "./gap-sums.js";

/**
 * A row of numbers at times, neighbours of which hang together as exp(-gap / T): a first-order autoregression in continuous
 * time, so that uneven gaps are no matter (R. H. Jones, Biometrics 37 (1981) 13-17; from memory).
 */
export interface Chain {
  /** Places of its members in the list of all numbers, in the order of time. */
  readonly rows: ArrayLike<number>;
  /** Time from the one before; the first is not used. */
  readonly gaps: Float64Array;
}

/** What a chain's correlation time was found to be. */
export interface CorrelationTime {
  /** In the unit of the gaps; 0: members do not hang together. */
  readonly time: number;
  /** Twice the rise of the restricted log-likelihood above that of members that do not hang together. */
  readonly gain: number;
}

/** Correlation of each member with the one before; 0 for the first. */
export function links({ gaps }: Chain, time: number): Float64Array {
  const phi = new Float64Array(gaps.length);
  if (!(time > 0)) return phi;
  for (let i = 1; i < phi.length; i++)
    phi[i] = gaps[i] === gaps[i - 1] && i > 1 ? phi[i - 1] : Math.min(closest, Math.exp(-gaps[i] / time));
  return phi;
}

/** Makes a chain that hangs together one of independent numbers of the same variance, in place. */
export function whiten(rows: ArrayLike<number>, phi: Float64Array, values: Float64Array): void {
  for (let i = phi.length - 1; i > 0; i--) {
    if (phi[i] === 0) continue;
    values[rows[i]] = (values[rows[i]] - phi[i] * values[rows[i - 1]]) / Math.sqrt(1 - phi[i] * phi[i]);
  }
}

/** The way back: lets independent numbers hang together, in place. */
export function colour(rows: ArrayLike<number>, phi: Float64Array, values: Float64Array): void {
  for (let i = 1; i < phi.length; i++)
    values[rows[i]] = phi[i] * values[rows[i - 1]] + Math.sqrt(1 - phi[i] * phi[i]) * values[rows[i]];
}

/** Writes the correlation matrix of the chain times the members of `v` to those of `out`. */
export function correlate(rows: ArrayLike<number>, phi: Float64Array, v: Float64Array, out: Float64Array): void {
  const n = phi.length;
  let from = 0;
  for (let i = 0; i < n; i++) {
    from = v[rows[i]] + phi[i] * from;
    out[rows[i]] = from;
  }
  from = 0;
  for (let i = n - 1; i > 0; i--) {
    from = phi[i] * (v[rows[i]] + from);
    out[rows[i - 1]] += from;
  }
}

/** Sum of the entries of a chain's correlation matrix, each to the first or second power. */
export function entries(phi: Float64Array, power: 1 | 2): number {
  let [sum, reach] = [0, 0];
  for (const p of phi) {
    reach = p ** power * (1 + reach);
    sum += 1 + 2 * reach;
  }
  return sum;
}

/** Columns and rows up to which what the fit took out of the residuals is counted, and rows to a column: of so many they are nothing. */
const mostWork = 4e6;
const mostRows = 2000;

/** Does what a fit took out of residuals count in how they hang together? */
export const worthTaking = (columns: number, rows: number): boolean =>
  columns ** 2 * rows <= mostWork && rows <= mostRows * columns;

/**
 * Correlation times of chains from the residuals of a least-squares fit by restricted maximum likelihood, which counts that the
 * fit has taken part of the correlation out: all numbers have one variance, chains do not hang together with one another.
 * @param residuals  of the fit, any common scale; rows in no chain stand alone
 * @param basis      orthonormal columns that the fit took out of the data
 * @see D. M. Cooper, R. Thompson, Biometrika 64 (1977) 625-628; J. C. Cheang, G. C. Reinsel, J. Am. Statist. Assoc. 95 (2000) 1173-1184 (from memory)
 */
export function correlationTimes(
  residuals: Float64Array,
  basis: readonly Float64Array[],
  chains: readonly Chain[],
): CorrelationTime[] {
  const kept = worthTaking(basis.length, residuals.length) ? basis : [];
  const all = new Restricted(residuals, kept, chains);
  for (let sweep = 0; sweep < (chains.length > 1 ? 2 : 1); sweep++) for (const c of chains.keys()) all.improve(c);
  return chains.map((_, c) => ({ time: all.times[c], gain: all.gain(c) }));
}

class Restricted {
  readonly times: number[];
  private readonly shares: Share[];
  private readonly alone: Share;
  private readonly sums: readonly (readonly GapSums[] | undefined)[];

  constructor(
    private readonly residuals: Float64Array,
    private readonly basis: readonly Float64Array[],
    private readonly chains: readonly Chain[],
  ) {
    this.times = chains.map(() => 0);
    const inChain = new Uint8Array(residuals.length);
    for (const { rows } of chains) for (let i = 0; i < rows.length; i++) inChain[rows[i]] = 1;
    const rest: number[] = [];
    for (let i = 0; i < inChain.length; i++) if (inChain[i] === 0) rest.push(i);
    this.sums = chains.map((c) => sumsByGap(c, [residuals, ...basis]));
    this.alone = this.walked({ rows: rest, gaps: new Float64Array(rest.length) }, 0);
    this.shares = chains.map((_, c) => this.share(c, 0));
  }

  private share(c: number, time: number): Share {
    const sums = this.sums[c];
    return sums ? shareOf(sums, time, this.basis.length) : this.walked(this.chains[c], time);
  }

  /** Finds the time of one chain at those of the others: a grid in its logarithm, then golden sections. */
  improve(c: number): void {
    const { gaps } = this.chains[c];
    if (gaps.length < fewest) return;
    const { typical, span } = this.sums[c] ? gapsOfSorts(this.sums[c]) : gapsOneByOne(gaps);
    if (!(typical > 0)) return;
    const [low, high] = [Math.log(typical / 4), Math.log(Math.max(span / 2, typical))];
    const at = (u: number): number => this.value(c, this.share(c, Math.exp(u)));
    const count = 16;
    const step = (high - low) / count;
    let best = low;
    let most = at(low);
    for (let k = 1; k <= count; k++) {
      const value = at(low + k * step);
      if (value > most) [best, most] = [low + k * step, value];
    }
    const found = golden(at, Math.max(low, best - step), Math.min(high, best + step), 0.01);
    const share = this.share(c, Math.exp(found));
    const white = this.share(c, 0);
    const better = this.value(c, share) > this.value(c, white);
    this.times[c] = better ? Math.exp(found) : 0;
    this.shares[c] = better ? share : white;
  }

  gain(c: number): number {
    if (this.times[c] === 0) return 0;
    return 2 * (this.value(c, this.shares[c]) - this.value(c, this.share(c, 0)));
  }

  /** Restricted log-likelihood with one chain's share in place of its own. */
  private value(c: number, share: Share): number {
    const p = this.basis.length;
    const parts = [this.alone, ...this.shares.map((s, k) => (k === c ? share : s))];
    const g = new Float64Array(p);
    const a = new Float64Array(p * p);
    let [square, log] = [0, 0];
    for (const part of parts) {
      square += part.square;
      log += part.logDeterminant;
      for (let k = 0; k < p; k++) g[k] += part.along[k];
      for (let k = 0; k < a.length; k++) a[k] += part.between[k];
    }
    const [explained, logOfA] = eliminate(a, g, p);
    const left = Math.max(square - explained, 1e-300);
    return -0.5 * ((this.residuals.length - p) * Math.log(left) + log + logOfA);
  }

  /** Member by member. */
  private walked(chain: Chain, time: number): Share {
    const { basis, residuals } = this;
    const { rows } = chain;
    const n = chain.gaps.length;
    const p = basis.length;
    const phi = links(chain, time);
    const along = new Float64Array(p);
    const between = new Float64Array(p * p);
    const q = new Float64Array(p);
    let [square, logDeterminant] = [0, 0];
    for (let i = 0; i < n; i++) {
      const f = phi[i];
      const own = 1 - f * f;
      const scale = f === 0 ? 1 : 1 / Math.sqrt(own);
      const before = f === 0 ? 0 : rows[i - 1];
      if (f !== 0) logDeterminant += Math.log(own);
      const e = scale * (residuals[rows[i]] - (f === 0 ? 0 : f * residuals[before]));
      square += e * e;
      for (let k = 0; k < p; k++) {
        q[k] = scale * (basis[k][rows[i]] - (f === 0 ? 0 : f * basis[k][before]));
        along[k] += q[k] * e;
        for (let l = 0; l <= k; l++) between[k * p + l] += q[k] * q[l];
      }
    }
    for (let k = 0; k < p; k++) for (let l = 0; l < k; l++) between[l * p + k] = between[k * p + l];
    return { square, logDeterminant, along, between };
  }
}

/** The middle one of the gaps, or the least that is none, and all of them together. */
function gapsOneByOne(gaps: Float64Array): { typical: number; span: number } {
  const sorted = gaps.slice(1).sort();
  const typical = sorted[sorted.length >> 1] || sorted.find((g) => g > 0) || 0;
  return { typical, span: sorted.reduce((s, g) => s + g, 0) };
}

/** The same where they are of few sorts. */
function gapsOfSorts(sums: readonly GapSums[]): { typical: number; span: number } {
  const sorts = sums.slice(1).sort((a, b) => a.gap - b.gap);
  const half = sorts.reduce((all, s) => all + s.count, 0) >> 1;
  let passed = 0;
  const middle = sorts.find((s) => {
    passed += s.count;
    return passed > half;
  });
  const typical = middle?.gap || sorts.find((s) => s.gap > 0)?.gap || 0;
  return { typical, span: sorts.reduce((all, s) => all + s.gap * s.count, 0) };
}

/** Members below which a chain says nothing of how it hangs together. */
const fewest = 10;

/** g' A^-1 g and ln det A of a positive definite A, by Cholesky; destroys both. */
function eliminate(a: Float64Array, g: Float64Array, p: number): [number, number] {
  let [explained, log] = [0, 0];
  for (let k = 0; k < p; k++) {
    const pivot = Math.max(a[k * p + k], 1e-300);
    log += Math.log(pivot);
    explained += (g[k] * g[k]) / pivot;
    for (let i = k + 1; i < p; i++) {
      const f = a[i * p + k] / pivot;
      g[i] -= f * g[k];
      for (let j = k + 1; j < p; j++) a[i * p + j] -= f * a[k * p + j];
    }
  }
  return [explained, log];
}

/** Place of the maximum of f between a and b, to a width. */
function golden(f: (u: number) => number, a: number, b: number, width: number): number {
  const ratio = (Math.sqrt(5) - 1) / 2;
  let [low, high] = [a, b];
  let [x, y] = [high - ratio * (high - low), low + ratio * (high - low)];
  let [fx, fy] = [f(x), f(y)];
  while (high - low > width) {
    if (fx > fy) {
      [high, y, fy] = [y, x, fx];
      x = high - ratio * (high - low);
      fx = f(x);
    } else {
      [low, x, fx] = [x, y, fy];
      y = low + ratio * (high - low);
      fy = f(y);
    }
  }
  return (low + high) / 2;
}
