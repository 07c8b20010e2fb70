import { type Chain, correlationTimes, entries, links, worthTaking } from "../numerics/autoregression.js";
import { random } from "../numerics/random.js";
import type { Block } from "./observations.js";

/** How far the residuals hang together. */
export interface Autocorrelation {
  /** Lag-1 correlation of neighbours in time, over all readings. */
  readonly lag1: number;
  /** lag1 in standard deviations of what independent residuals give, sqrt(n) lag1. */
  readonly deviations: number;
  /** True where some reading's residuals hang together. */
  readonly significant: boolean;
  /** Independent readings that would tell a mean as well; n where none hang together. */
  readonly effective: number;
  /** The same for a variance. */
  readonly effectiveForVariance: number;
  /** Twice the log-likelihood that hanging together adds to that of independent residuals of these sizes. */
  readonly gain: number;
  /** The readings that hang together, in the order of the blocks. */
  readonly strands: readonly Strand[];
}

/** What a fit took out of residuals. */
export interface Taken {
  readonly count: number;
  /** Orthonormal, asked for where they count. */
  columns(): readonly Float64Array[];
}

/** The residuals of one reading, which hang together as exp(-gap / time). */
export interface Strand {
  readonly block: number;
  /** s. */
  readonly time: number;
  /** Twice the log-likelihood gained, restricted to what the fit left. */
  readonly gain: number;
  /** Places in the list of all observations, ascending in time; censored ones are left out. */
  readonly rows: Int32Array;
  /** Correlation of each with the one before. */
  readonly phi: Float64Array;
}

/**
 * How the residuals of each reading hang together: a first-order autoregression in time against independent residuals, chosen
 * where AICc is smaller by more than 2, or as the reading's `correlated:` says.
 * @param residuals  one per observation, any common scale
 * @param taken      what the fit took out of them: columns longer by the priors or not at all
 * @see Burnham & Anderson, Model Selection and Multimodel Inference, 2nd ed. 2002, section 2.4
 */
export function autocorrelationOf(
  blocks: readonly Block[],
  residuals: Float64Array,
  { count, columns }: Taken,
): Autocorrelation {
  const basis = worthTaking(count, residuals.length) ? columns() : [];
  const chains = blocks.map(chainOf);
  const n = chains.reduce((sum, c) => sum + c.rows.length, 0);
  const asked = blocks.map((b, k) => (b.declared.correlated === undefined ? chains[k] : none));
  const found = correlationTimes(residuals, basis, asked);
  const unknowns = count + 1;
  const left = n - unknowns - 2;
  // What AICc asks of one more unknown, and two more: with less between them the two are as good (Burnham & Anderson, section 2.6).
  const price = left > 0 ? 4 + (4 * (unknowns + 1)) / left : Number.POSITIVE_INFINITY;
  const least = asNoiseGives(asked, basis, residuals.length, price, found);
  const strands = found.flatMap(({ time, gain }, block): Strand[] => {
    if (gain <= least) return [];
    const { rows } = chains[block];
    return [{ block, time, gain, rows: Int32Array.from(rows), phi: links(chains[block], time) }];
  });
  const lag1 = lagOne(chains, residuals);
  const together = chains.map((c, k) => (strands.some((s) => s.block === k) ? c : none));
  const whole = strands.length > 0 ? correlationTimes(residuals, [], together) : [];
  const linked = new Map(strands.map((s) => [s.block, s.phi]));
  let [effective, square] = [0, 0];
  for (const [k, c] of chains.entries()) {
    const count = c.rows.length;
    const phi = linked.get(k);
    effective += phi ? count ** 2 / entries(phi, 1) : count;
    square += phi ? entries(phi, 2) : count;
  }
  return {
    lag1,
    deviations: Math.sqrt(n) * lag1,
    significant: strands.length > 0,
    effective,
    effectiveForVariance: square > 0 ? n ** 2 / square : n,
    gain: whole.reduce((sum, { gain }) => sum + gain, 0),
    strands,
  };
}

/** Up to so many readings the law of large numbers is no guide to what noise gives by itself. */
const fewReadings = 200;
const draws = 499;
/** The draws of noise that may gain as much: 1 %. */
const allowed = 4;

/**
 * The gain that only 1 % of fits to plain noise reach in any of their readings, by drawing such noise at the same times with the
 * same columns taken out; not below `price`. With few readings the fit bends with them, and a gain says less than AICc takes it for.
 * @see A. C. Davison, D. V. Hinkley, Bootstrap Methods and their Application, Cambridge 1997, section 4.2 (Monte Carlo tests; from memory)
 */
function asNoiseGives(
  chains: readonly Chain[],
  basis: readonly Float64Array[],
  length: number,
  price: number,
  found: readonly { readonly gain: number }[],
): number {
  const count = chains.reduce((sum, c) => sum + c.rows.length, 0);
  const most = Math.max(0, ...found.map((f) => f.gain));
  if (!(most > price) || count > fewReadings) return price;
  const draw = random(1);
  const noise = new Float64Array(length);
  const gains: number[] = [];
  let above = 0;
  for (let k = 0; k < draws && above <= allowed; k++) {
    for (let i = 0; i < length; i++) noise[i] = draw.normal();
    for (const q of basis) {
      const share = q.reduce((sum, x, i) => sum + x * noise[i], 0);
      for (let i = 0; i < length; i++) noise[i] -= share * q[i];
    }
    const gain = Math.max(...correlationTimes(noise, basis, chains).map((c) => c.gain));
    gains.push(gain);
    if (gain >= most) above++;
  }
  // Noise does as well: none hangs together.
  if (above > allowed) return Number.POSITIVE_INFINITY;
  gains.sort((a, b) => b - a);
  return Math.max(price, gains[allowed]);
}

const none: Chain = { rows: [], gaps: new Float64Array(0) };

/** The seen points of a block, one after another. */
export function chainOf({ time, from, censored }: Block): Chain {
  const n = time.length;
  const seen = new Int32Array(n);
  let count = 0;
  for (let i = 0; i < n; i++) if (!censored?.[i]) seen[count++] = i;
  const rows = seen.subarray(0, count).map((i) => from + i);
  const gaps = new Float64Array(count);
  for (let k = 1; k < count; k++) gaps[k] = time[seen[k]] - time[seen[k - 1]];
  return { rows, gaps };
}

function lagOne(chains: readonly Chain[], residuals: Float64Array): number {
  let [square, product] = [0, 0];
  for (const { rows } of chains) {
    for (let k = 0; k < rows.length; k++) {
      square += residuals[rows[k]] ** 2;
      if (k > 0) product += residuals[rows[k]] * residuals[rows[k - 1]];
    }
  }
  return square > 0 ? product / square : 0;
}
