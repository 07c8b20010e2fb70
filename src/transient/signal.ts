import { type Blends, Carried } from "./blends.js";

/** What an integral over time is weighed with: a flow, m3/s. */
export type Weight = (t: number, side: number) => number;

/**
 * A mixture over time, one concentration per component (scaled as `Kinetics` has them), from 0 on; before 0 what stood there
 * before. At a jump, side 1 is the value after it, -1 before.
 */
export interface Signal {
  /** Writes the mixture at t (s) into out[to ...]. */
  read(t: number, side: number, out: Float64Array, to: number): void;
  /** Writes the integral from 0 to t; the weight may kink and jump only where the signal is known to. */
  integral(t: number, out: Float64Array, weight?: Weight): void;
  /** A time after t that what reads this should not step over at once: where the piece ends that comes `count` pieces later. */
  pace(t: number, count: number): number;
}

/** What enters a node: signals mixed as the flows then are. */
export class MixedSignal implements Signal {
  private readonly one: Float64Array;
  private readonly first: number;

  /** @param sources in the order of the node's sources */
  constructor(
    private readonly sources: readonly Signal[],
    private readonly blends: Blends,
    node: number,
    private readonly width: number,
  ) {
    this.one = new Float64Array(width);
    this.first = blends.first(node);
  }

  read(t: number, side: number, out: Float64Array, to: number): void {
    const { one, sources, width, first } = this;
    for (let i = 0; i < width; i++) out[to + i] = 0;
    for (let k = 0; k < sources.length; k++) {
      sources[k].read(t, side, one, 0);
      const part = this.blends.at(t, side)[first + k];
      for (let i = 0; i < width; i++) out[to + i] += part * one[i];
      if (this.blends.apart) {
        out[to + width - 1] += (this.blends.at(t, side, Carried.warmth)[first + k] - part) * one[width - 1];
      }
    }
  }

  integral(t: number, out: Float64Array, weight?: Weight): void {
    const { one, sources, width, first, blends } = this;
    const constant = blends.course.constant ? blends.at(0, 1) : undefined;
    for (let i = 0; i < width; i++) out[i] = 0;
    for (let k = 0; k < sources.length; k++) {
      if (constant) sources[k].integral(t, one, weight);
      else sources[k].integral(t, one, (u, side) => (weight?.(u, side) ?? 1) * blends.at(u, side)[first + k]);
      const part = constant ? constant[first + k] : 1;
      for (let i = 0; i < width; i++) out[i] += part * one[i];
      // Exchangers are there only while flows are constant.
      if (blends.apart) out[width - 1] += (blends.at(0, 1, Carried.warmth)[first + k] - part) * one[width - 1];
    }
  }

  pace(t: number, count: number): number {
    const { knots } = this.blends.course;
    let least = Number.POSITIVE_INFINITY;
    for (let k = 0; k < knots.length && least === Number.POSITIVE_INFINITY; k++) if (knots[k] > t) least = knots[k];
    return this.sources.reduce((near, s) => Math.min(near, s.pace(t, count)), least);
  }
}
