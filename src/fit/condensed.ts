/** Readings of a block said by few: times at which the curve is wanted, and what is compared there. */
export interface Condensed {
  /** s */
  readonly time: Float64Array;
  /** Weighted. */
  readonly target: Float64Array;
  /** Weighs a curve at the times as the target is weighted. */
  weigh(values: Float64Array, into: Float64Array): void;
  /** Is a curve, at all readings, still what few of them say of it, to this part of its peak? */
  follows(curve: Float64Array, allowed: number): boolean;
  /** Readings at the ties and half-way between them, of each stretch that few stand for. */
  readonly probes: Int32Array;
  /** The same for values at the probes alone. */
  followsProbes(values: Float64Array, allowed: number): boolean;
}

/** Nodes of a stretch. */
const nodes = 6;
/** Stretches shorter than this are not cut further: their readings stay. */
const fewest = 24;
const longest = 8192;
/** What the polynomial may miss of the curve, as a part of its peak. */
const allowed = 1e-10;

interface Stretch {
  readonly from: number;
  readonly to: number;
  /** Readings at which the polynomial is tied; undefined where every reading stays. */
  readonly ties: Int32Array | undefined;
}

/**
 * Condenses the readings of one block. On a stretch on which the curve is a polynomial of its values f at the nodes, f = L f_nodes,
 * the sum |W (y - L f_nodes)|^2 is |z - R f_nodes|^2 and what no curve changes, with R'R = L'W^2 L and R'z = L'W^2 y: few numbers
 * with the same least-squares fit, standard errors and all. Nodes near those of Chebyshev keep L well conditioned, so that
 * Cholesky loses no digits that matter.
 */
export class Condenser {
  private readonly peak: number;

  /**
   * @param weight of each reading
   * @param curve  at the readings, SI, near the best fit
   * @param margin readings that stay on either side of what is not smooth
   */
  constructor(
    private readonly time: Float64Array,
    private readonly measured: Float64Array,
    private readonly weight: Float64Array,
    private readonly curve: Float64Array,
    private readonly margin: number,
  ) {
    this.peak = peakOf(curve);
  }

  condensed(): Condensed {
    const stretches = this.withMargins(this.cut());
    const size = stretches.reduce((sum, s) => sum + (s.ties ? nodes : s.to - s.from), 0);
    const time = new Float64Array(size);
    const target = new Float64Array(size);
    /** By stretch: R, row-major, or the weights of readings that stay. */
    const factors: Float64Array[] = [];
    let place = 0;
    for (const { from, to, ties } of stretches) {
      if (ties) {
        const { r, z } = this.factored(from, to, ties);
        ties.forEach((i, k) => {
          time[place + k] = this.time[i];
        });
        target.set(z, place);
        factors.push(r);
        place += nodes;
      } else {
        factors.push(this.weight.subarray(from, to));
        for (let i = from; i < to; i++, place++) {
          time[place] = this.time[i];
          target[place] = this.weight[i] * this.measured[i];
        }
      }
    }
    const tied = stretches.map((s) => s.ties !== undefined);
    const weigh = (values: Float64Array, into: Float64Array): void => {
      let at = 0;
      for (let s = 0; s < factors.length; s++) {
        const f = factors[s];
        if (!tied[s]) {
          for (let i = 0; i < f.length; i++) into[at + i] = f[i] * values[at + i];
          at += f.length;
          continue;
        }
        for (let k = 0; k < nodes; k++) {
          let sum = 0;
          for (let l = k; l < nodes; l++) sum += f[k * nodes + l] * values[at + l];
          into[at + k] = sum;
        }
        at += nodes;
      }
    };
    const held = stretches.flatMap((s) => s.ties ?? []);
    const follows = (all: Float64Array, part: number): boolean => {
      const most = part * peakOf(all);
      return stretches.every(({ from, to, ties }) => !ties || this.follows(from, to, ties, all, most));
    };
    const probes = Int32Array.from(held.flatMap(probesOf));
    const followsProbes = (values: Float64Array, part: number): boolean => {
      const most = part * peakOf(values);
      return held.every((ties, s) => this.followsBetween(ties, values.subarray(s * probed, (s + 1) * probed), most));
    };
    return { time, target, weigh, follows, probes, followsProbes };
  }

  /** Halves stretches until the curve is a polynomial on each, or they are short. */
  private cut(): Stretch[] {
    const done: Stretch[] = [];
    const n = this.time.length;
    const count = Math.ceil(n / longest);
    const waiting: [number, number][] = [];
    for (let k = count - 1; k >= 0; k--) waiting.push([Math.floor((k * n) / count), Math.floor(((k + 1) * n) / count)]);
    for (let next = waiting.pop(); next; next = waiting.pop()) {
      const [from, to] = next;
      const ties = this.tiesOf(from, to);
      if (to - from < fewest || (ties && this.follows(from, to, ties, this.curve, allowed * this.peak))) {
        done.push({ from, to, ties: to - from < fewest ? undefined : ties });
      } else {
        const middle = (from + to) >> 1;
        waiting.push([middle, to], [from, middle]);
      }
    }
    return done;
  }

  /** What lies near a stretch whose readings stay keeps its readings too. */
  private withMargins(stretches: readonly Stretch[]): Stretch[] {
    const kept = stretches.filter((s) => !s.ties);
    return stretches.map((s) =>
      kept.some((k) => k.from - this.margin < s.to && k.to + this.margin > s.from) ? { ...s, ties: undefined } : s,
    );
  }

  /** Readings nearest to Chebyshev's points; undefined where two are one, or at one time. */
  private tiesOf(from: number, to: number): Int32Array | undefined {
    const { time } = this;
    const last = to - from - 1;
    const ties = new Int32Array(nodes);
    for (let k = 0; k < nodes; k++) {
      ties[k] = from + Math.round((last * (1 - Math.cos(((2 * k + 1) * Math.PI) / (2 * nodes)))) / 2);
      if (k > 0 && !(time[ties[k]] > time[ties[k - 1]])) return undefined;
    }
    return ties;
  }

  /** Is a curve the polynomial through its values at the ties? */
  private follows(from: number, to: number, ties: Int32Array, curve: Float64Array, most: number): boolean {
    const { time } = this;
    const basis = new Lagrange(ties, time);
    const off = (i: number): boolean => {
      const l = basis.at(time[i]);
      let sum = 0;
      for (let k = 0; k < nodes; k++) sum += l[k] * curve[ties[k]];
      return !(Math.abs(sum - curve[i]) <= most);
    };
    // A few first: they tell most of what is not smooth.
    const stride = Math.max(1, (to - from) >> 4);
    for (let i = from; i < to; i += stride) if (off(i)) return false;
    for (let i = from; i < to; i++) if (off(i)) return false;
    return true;
  }

  /** The same of a stretch by values at its probes. */
  private followsBetween(ties: Int32Array, values: Float64Array, most: number): boolean {
    const basis = new Lagrange(ties, this.time);
    const at = probesOf(ties);
    for (let k = 1; k < probed; k += 2) {
      const l = basis.at(this.time[at[k]]);
      let sum = 0;
      for (let j = 0; j < nodes; j++) sum += l[j] * values[2 * j];
      if (!(Math.abs(sum - values[k]) <= most)) return false;
    }
    return true;
  }

  private factored(from: number, to: number, ties: Int32Array): { r: Float64Array; z: Float64Array } {
    const { time, measured, weight } = this;
    const basis = new Lagrange(ties, time);
    const gram = new Float64Array(nodes * nodes);
    const z = new Float64Array(nodes);
    for (let i = from; i < to; i++) {
      const l = basis.at(time[i]);
      const square = weight[i] * weight[i];
      for (let k = 0; k < nodes; k++) {
        const share = square * l[k];
        z[k] += share * measured[i];
        for (let j = k; j < nodes; j++) gram[k * nodes + j] += share * l[j];
      }
    }
    return { r: cholesky(gram, z), z };
  }
}

/** Ties, and readings half-way from one to the next, ascending. */
const probed = 2 * nodes - 1;
const probesOf = (ties: Int32Array): number[] =>
  Array.from({ length: probed }, (_, k) => (ties[k >> 1] + ties[(k + 1) >> 1]) >> 1);

function peakOf(curve: Float64Array): number {
  let most = 0;
  for (let i = 0; i < curve.length; i++) most = Math.max(most, Math.abs(curve[i]));
  return most;
}

/** Lagrange's polynomials over the times of ties. */
class Lagrange {
  private readonly places = new Float64Array(nodes);
  private readonly weights = new Float64Array(nodes);
  private readonly values = new Float64Array(nodes);
  private readonly perSpan: number;

  constructor(ties: Int32Array, time: Float64Array) {
    for (let k = 0; k < nodes; k++) this.places[k] = time[ties[k]];
    const span = this.places[nodes - 1] - this.places[0];
    this.perSpan = 1 / span;
    for (let k = 0; k < nodes; k++) {
      let product = 1;
      for (let j = 0; j < nodes; j++) if (j !== k) product *= (this.places[k] - this.places[j]) / span;
      this.weights[k] = 1 / product;
    }
  }

  /** By tie; good until the next. */
  at(t: number): Float64Array {
    const { values, weights, places, perSpan } = this;
    // Products from both ends: no quotient, which costs more than all of them.
    let product = 1;
    for (let k = 0; k < nodes; k++) {
      values[k] = weights[k] * product;
      product *= (t - places[k]) * perSpan;
    }
    product = 1;
    for (let k = nodes - 1; k >= 0; k--) {
      values[k] *= product;
      product *= (t - places[k]) * perSpan;
    }
    return values;
  }
}

/** R with R'R = A (its upper half is read), row-major; z becomes R'^-1 z. */
function cholesky(a: Float64Array, z: Float64Array): Float64Array {
  const n = z.length;
  const r = new Float64Array(n * n);
  for (let k = 0; k < n; k++) {
    for (let j = k; j < n; j++) {
      let sum = a[k * n + j];
      for (let i = 0; i < k; i++) sum -= r[i * n + k] * r[i * n + j];
      if (j === k) r[k * n + k] = Math.sqrt(Math.max(sum, 0));
      else r[k * n + j] = r[k * n + k] > 0 ? sum / r[k * n + k] : 0;
    }
    let left = z[k];
    for (let i = 0; i < k; i++) left -= r[i * n + k] * z[i];
    z[k] = r[k * n + k] > 0 ? left / r[k * n + k] : 0;
  }
  return r;
}
