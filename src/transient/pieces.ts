import { gaussLegendre } from "../numerics/gauss-legendre.js";
import { enlarged, lastUpTo } from "../numerics/growing.js";
import { radauCoefficients } from "../numerics/radau-coefficients.js";
import { stepBasis } from "../simulate/history.js";
import type { Signal, Weight } from "./signal.js";

/** Stages of a step; a piece of a signal is known at its start and at them. */
export type StageCount = 3 | 5 | 7;

/** Places of a piece, and what weighs values there. */
export interface PieceBasis {
  readonly stages: StageCount;
  /** From 0 to 1. */
  readonly places: Float64Array;
  weigh(part: number, weights: Float64Array): void;
  weighIntegral(part: number, weights: Float64Array): void;
  /** The integral over a whole piece, from the stages alone: what the method itself adds up, so that balances close. */
  readonly whole: Float64Array;
}

export function pieceBasis(stages: StageCount): PieceBasis {
  const { c } = radauCoefficients(stages);
  return { stages, ...stepBasis(c), whole: Float64Array.of(0, ...integralWeights(c)) };
}

/** Integrals from 0 to 1 of the polynomials that are 1 at one place and 0 at the others. */
function integralWeights(c: Float64Array): number[] {
  return Array.from(c, (own, j) => {
    let powers = [1];
    for (let m = 0; m < c.length; m++) {
      if (m === j) continue;
      const next = new Array<number>(powers.length + 1).fill(0);
      powers.forEach((a, k) => {
        next[k] -= (a * c[m]) / (own - c[m]);
        next[k + 1] += a / (own - c[m]);
      });
      powers = next;
    }
    return powers.reduce((sum, a, k) => sum + a / (k + 1), 0);
  });
}

const { point, weight: gaussWeight } = gaussLegendre(8);

/** Times closer than this, relative, are one: sums of delays are rounded. */
export const sameTime = 2e-12;

/** A mixture as polynomials piece by piece, one after another; between pieces it may jump. */
export class Pieces implements Signal {
  private starts = new Float64Array(32);
  private lengths = new Float64Array(32);
  private values: Float64Array;
  /** Integrals from 0 to the start of every piece. */
  private sums: Float64Array;
  private count = 0;
  private last = 0;
  private readonly stride: number;
  private readonly weights: Float64Array;

  /** @param before what stood there before 0; zero where it is left out */
  constructor(
    readonly basis: PieceBasis,
    readonly width: number,
    private readonly before?: Float64Array,
  ) {
    this.stride = basis.places.length * width;
    this.values = new Float64Array(32 * this.stride);
    this.sums = new Float64Array(33 * width);
    this.weights = new Float64Array(basis.places.length);
  }

  get end(): number {
    return this.count === 0 ? 0 : this.starts[this.count - 1] + this.lengths[this.count - 1];
  }

  /** Adds a piece; `write(place, into, at)` puts the mixture at one of its places into an array. */
  add(start: number, length: number, write: (place: number, into: Float64Array, at: number) => void): void {
    if (this.count === this.starts.length) this.grow();
    const { basis, width, stride, count, values, sums } = this;
    this.starts[count] = start;
    this.lengths[count] = length;
    for (let p = 0; p < basis.places.length; p++) write(p, values, count * stride + p * width);
    for (let i = 0; i < width; i++) {
      let sum = 0;
      for (let p = 1; p < basis.places.length; p++) sum += basis.whole[p] * values[count * stride + p * width + i];
      sums[(count + 1) * width + i] = sums[count * width + i] + length * sum;
    }
    this.count++;
  }

  read(t: number, side: number, out: Float64Array, to: number): void {
    if (t < 0 || this.count === 0 || (t === 0 && side < 0)) {
      for (let i = 0; i < this.width; i++) out[to + i] = this.before?.[i] ?? 0;
      return;
    }
    const k = this.locate(t, side);
    this.basis.weigh(this.partOf(k, t), this.weights);
    this.blend(k, out, to);
  }

  integral(t: number, out: Float64Array, weight?: Weight): void {
    out.fill(0, 0, this.width);
    if (!(t > 0) || this.count === 0) return;
    if (weight) {
      this.weighed(t, weight, out);
      return;
    }
    const k = this.locate(t, -1);
    const part = this.partOf(k, t);
    if (part === 1) {
      for (let i = 0; i < this.width; i++) out[i] = this.sums[(k + 1) * this.width + i];
      return;
    }
    this.basis.weighIntegral(part, this.weights);
    this.blend(k, out, 0);
    for (let i = 0; i < this.width; i++) out[i] = this.sums[k * this.width + i] + this.lengths[k] * out[i];
  }

  /** Whole pieces as the method adds them up, what is left of the last as a polynomial. */
  private weighed(t: number, weight: Weight, out: Float64Array): void {
    const { basis, width, stride, values, starts, lengths } = this;
    const last = this.locate(t, -1);
    const rest = this.partOf(last, t);
    const whole = rest === 1 ? last + 1 : last;
    const { places } = basis;
    for (let k = 0; k < whole; k++) {
      for (let p = 1; p < places.length; p++) {
        const w = lengths[k] * basis.whole[p] * weight(starts[k] + places[p] * lengths[k], -1);
        for (let i = 0, at = k * stride + p * width; i < width; i++) out[i] += w * values[at + i];
      }
    }
    if (rest === 1) return;
    for (let g = 0; g < point.length; g++) {
      const part = (rest * (1 + point[g])) / 2;
      basis.weigh(part, this.weights);
      const w = ((rest * lengths[last]) / 2) * gaussWeight[g] * weight(starts[last] + part * lengths[last], 1);
      for (let i = 0; i < width; i++) {
        let sum = 0;
        for (let p = 0; p < places.length; p++) sum += this.weights[p] * values[last * stride + p * width + i];
        out[i] += w * sum;
      }
    }
  }

  pace(t: number, count: number): number {
    if (this.count === 0) return Number.POSITIVE_INFINITY;
    const k = this.locate(Math.max(0, t), 1) + count;
    return k < this.count ? this.starts[k] : Number.POSITIVE_INFINITY;
  }

  private blend(k: number, out: Float64Array, to: number): void {
    const { weights, values, width } = this;
    for (let i = 0; i < width; i++) {
      let sum = 0;
      for (let p = 0, at = k * this.stride + i; p < weights.length; p++, at += width) sum += weights[p] * values[at];
      out[to + i] = sum;
    }
  }

  private partOf(k: number, t: number): number {
    return Math.max(0, Math.min(1, (t - this.starts[k]) / this.lengths[k]));
  }

  /** The piece that holds a time. */
  private locate(t: number, side: number): number {
    const { starts, count } = this;
    const soft = t + side * sameTime * t;
    let k = Math.min(this.last, count - 1);
    if (!(starts[k] <= soft) || (k + 1 < count && starts[k + 1] <= soft)) {
      k = lastUpTo(starts, count, soft);
    }
    this.last = k;
    return k;
  }

  private grow(): void {
    const room = 2 * this.starts.length;
    this.starts = enlarged(this.starts, room);
    this.lengths = enlarged(this.lengths, room);
    this.values = enlarged(this.values, room * this.stride);
    this.sums = enlarged(this.sums, (room + 1) * this.width);
  }
}
