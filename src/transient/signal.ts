/**
 * A mixture over time, one concentration per component (scaled as `Kinetics` has them), from 0 on; before 0 what stood there
 * before. At a jump, side 1 is the value after it, -1 before.
 */
export interface Signal {
  /** Writes the mixture at t (s) into out[to ...]. */
  read(t: number, side: number, out: Float64Array, to: number): void;
  /** Writes the integral from 0 to t. */
  integral(t: number, out: Float64Array): void;
  /** A time after t that what reads this should not step over at once: where the piece ends that comes `count` pieces later. */
  pace(t: number, count: number): number;
}

/** Signals mixed in fixed parts. */
export class MixedSignal implements Signal {
  private readonly one: Float64Array;

  /** @param parts of what is made, one per signal */
  constructor(
    private readonly sources: readonly Signal[],
    private readonly parts: ArrayLike<number>,
    private readonly width: number,
  ) {
    this.one = new Float64Array(width);
  }

  read(t: number, side: number, out: Float64Array, to: number): void {
    this.mix((source) => source.read(t, side, this.one, 0), out, to);
  }

  integral(t: number, out: Float64Array): void {
    this.mix((source) => source.integral(t, this.one), out, 0);
  }

  pace(t: number, count: number): number {
    return this.sources.reduce((least, s) => Math.min(least, s.pace(t, count)), Number.POSITIVE_INFINITY);
  }

  private mix(take: (source: Signal) => void, out: Float64Array, to: number): void {
    const { one, parts, sources, width } = this;
    for (let i = 0; i < width; i++) out[to + i] = 0;
    for (let k = 0; k < sources.length; k++) {
      take(sources[k]);
      for (let i = 0; i < width; i++) out[to + i] += parts[k] * one[i];
    }
  }
}
