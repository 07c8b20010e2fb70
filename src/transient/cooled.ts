import type { Signal, Weight } from "./signal.js";

/** What leaves, once it has warmed a feed: the temperature is the last component. */
export class Cooled implements Signal {
  private readonly cold: Float64Array;

  /** @param drop part of the difference to the feed that it gives off */
  constructor(
    private readonly hot: Signal,
    private readonly feed: Signal,
    private readonly drop: number,
    private readonly width: number,
  ) {
    this.cold = new Float64Array(width);
  }

  read(t: number, side: number, out: Float64Array, to: number): void {
    this.hot.read(t, side, out, to);
    this.feed.read(t, side, this.cold, 0);
    const i = this.width - 1;
    out[to + i] -= this.drop * (out[to + i] - this.cold[i]);
  }

  integral(t: number, out: Float64Array, weight?: Weight): void {
    this.hot.integral(t, out, weight);
    this.feed.integral(t, this.cold, weight);
    const i = this.width - 1;
    out[i] -= this.drop * (out[i] - this.cold[i]);
  }

  pace(t: number, count: number): number {
    return Math.min(this.hot.pace(t, count), this.feed.pace(t, count));
  }
}
