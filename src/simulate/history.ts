import { enlarged, lastUpTo } from "../numerics/growing.js";
/** Places within a step at which its polynomials are known: its start, and the stages. */
export interface StepBasis {
  /** From 0 (start) to 1 (end), ascending. */
  readonly places: Float64Array;
  /** Value, at a part of the step, of the polynomial through values at the places; writes the weights. */
  weigh(part: number, weights: Float64Array): void;
  /** The same for the integral from the start on, in lengths of the step. */
  weighIntegral(part: number, weights: Float64Array): void;
}

/** @param stages places of the stages, 0 < c <= 1 */
export function stepBasis(stages: ArrayLike<number>): StepBasis {
  const places = Float64Array.of(0, ...Array.from(stages));
  const n = places.length;
  /** Polynomials that are 1 at one place and 0 at the others, by powers. */
  const powers = Array.from(places, (_, j) => {
    let p = [1];
    for (let m = 0; m < n; m++) {
      if (m === j) continue;
      const scale = 1 / (places[j] - places[m]);
      const next = new Array<number>(p.length + 1).fill(0);
      p.forEach((a, k) => {
        next[k] -= a * places[m] * scale;
        next[k + 1] += a * scale;
      });
      p = next;
    }
    return p;
  });
  return {
    places,
    weigh(part, weights) {
      for (let j = 0; j < n; j++) {
        let w = 1;
        for (let m = 0; m < n; m++) if (m !== j) w *= (part - places[m]) / (places[j] - places[m]);
        weights[j] = w;
      }
    },
    weighIntegral(part, weights) {
      for (let j = 0; j < n; j++) {
        let sum = 0;
        for (let k = n - 1; k >= 0; k--) sum = sum * part + powers[j][k] / (k + 1);
        weights[j] = sum * part;
      }
    },
  };
}

/** Signals over time as polynomials, step by step; between steps they may jump. */
export class History {
  private starts = new Float64Array(64);
  private lengths = new Float64Array(64);
  /** Values at the places of every step, signal by signal. */
  private values: Float64Array;
  /** Integrals from 0 to the start of every step. */
  private before: Float64Array;
  private steps = 0;
  private last = 0;
  private readonly stride: number;
  private readonly weights: Float64Array;
  private readonly whole: Float64Array;

  constructor(
    private readonly basis: StepBasis,
    private readonly signals: number,
  ) {
    this.stride = basis.places.length * signals;
    this.values = new Float64Array(64 * this.stride);
    this.before = new Float64Array(65 * signals);
    this.weights = new Float64Array(basis.places.length);
    this.whole = new Float64Array(basis.places.length);
    basis.weighIntegral(1, this.whole);
  }

  get end(): number {
    return this.steps === 0 ? 0 : this.starts[this.steps - 1] + this.lengths[this.steps - 1];
  }

  /**
   * Adds a step; `write(place, row)` fills a row with the signals at one of its places.
   */
  add(start: number, length: number, write: (place: number, row: Float64Array) => void): void {
    if (this.steps === this.starts.length) this.grow();
    const { signals, stride, steps } = this;
    this.starts[steps] = start;
    this.lengths[steps] = length;
    const places = this.basis.places.length;
    for (let p = 0; p < places; p++) {
      const from = steps * stride + p * signals;
      write(p, this.values.subarray(from, from + signals));
    }
    for (let s = 0; s < signals; s++) {
      let sum = 0;
      for (let p = 0; p < places; p++) sum += this.whole[p] * this.values[steps * stride + p * signals + s];
      this.before[(steps + 1) * signals + s] = this.before[steps * signals + s] + length * sum;
    }
    this.steps++;
  }

  /** Where the step begins that comes `count` steps after that which holds t; the end where there are none so late. */
  stepAfter(t: number, count: number): number {
    if (this.steps === 0) return 0;
    const k = this.locate(Math.max(0, t), 1) + count;
    return k < this.steps ? this.starts[k] : this.end;
  }

  /** @param side 1: at a jump the value after it; -1: before */
  value(signal: number, t: number, side: number): number {
    if (this.steps === 0) return 0;
    const k = this.locate(t, side);
    this.basis.weigh(this.partOf(k, t), this.weights);
    return this.sum(k, signal);
  }

  /** Integral from 0 on. */
  integral(signal: number, t: number): number {
    if (this.steps === 0) return 0;
    const k = this.locate(t, 1);
    this.basis.weighIntegral(this.partOf(k, t), this.weights);
    return this.before[k * this.signals + signal] + this.lengths[k] * this.sum(k, signal);
  }

  /** Steps may be shorter than rounding of the time: never far beyond one. */
  private partOf(k: number, t: number): number {
    return Math.max(0, Math.min(1, (t - this.starts[k]) / this.lengths[k]));
  }

  private sum(k: number, signal: number): number {
    const { weights, values, signals } = this;
    let sum = 0;
    for (let p = 0, at = k * this.stride + signal; p < weights.length; p++, at += signals)
      sum += weights[p] * values[at];
    return sum;
  }

  /** The step that holds a time. Rounding in times that are sums of many delays does not put one beyond a jump. */
  private locate(t: number, side: number): number {
    const { starts, steps } = this;
    const soft = t + side * (2e-12 * t);
    let k = this.last < steps ? this.last : steps - 1;
    if (!(starts[k] <= soft) || (k + 1 < steps && starts[k + 1] <= soft)) {
      if (k + 2 < steps && starts[k + 1] <= soft && starts[k + 2] > soft) k++;
      else k = lastUpTo(starts, steps, soft);
    }
    this.last = k;
    return k;
  }

  private grow(): void {
    const room = 2 * this.starts.length;
    this.starts = enlarged(this.starts, room);
    this.lengths = enlarged(this.lengths, room);
    this.values = enlarged(this.values, room * this.stride);
    this.before = enlarged(this.before, (room + 1) * this.signals);
  }
}
