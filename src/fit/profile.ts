import type { Evaluation, Problem } from "./problem.js";
import { closely, descend, type Watch } from "./search.js";
import type { Settled } from "./settle.js";
import { delayWalks, withCoordinate } from "./starts.js";

/** How one side of a profile ends. */
export type ProfileEnd =
  /** The sum of squares rises smoothly through the limit. */
  | "smooth"
  /** It jumps over the limit, or turns up to it all at once, as where a front crosses a sample. */
  | "step"
  /** The parameter's bound, or the end of what makes a vessel, comes first. */
  | "bound"
  /** It never reached the limit as far as was looked. */
  | "open";

/** The sum of squares along one parameter, the others at their best: in u of its coordinate. */
export interface Profile {
  /** Ascending; the optimum among them. */
  readonly at: readonly number[];
  /** (S - least S) / variance at each, the variance that of residuals along the change of the curve: the square of the profile t. */
  readonly rise: readonly number[];
  /** Where the rise reaches its limit. */
  readonly interval: readonly [number, number];
  readonly ends: readonly [ProfileEnd, ProfileEnd];
}

/** What a profile is measured by. */
export interface ProfileScale {
  /** Of one weighted residual. */
  readonly variance: number;
  /** Rise at which the interval ends: the square of a t-quantile. */
  readonly limit: number;
  /** What the rise is divided by where residuals hang together, for a change of the weighted residuals. */
  readonly along: ((change: Float64Array) => number) | undefined;
  /** Standard error of the coordinate from linear theory, u; where there is none, a part of its range. */
  readonly step: number;
}

/** Most points on a side before it counts as open. */
const mostSteps = 60;

/**
 * Profile of one coordinate: it is moved away from the optimum step by step, all others descend from where they were, until the
 * sum of squares has risen to the limit; there the end is found by halving, over a jump as well. Where a front between samples
 * holds the others, they also try its neighbouring gaps before an end is believed.
 * @see D.M. Bates, D.G. Watts, Nonlinear Regression Analysis and Its Applications, Wiley 1988, section 6.1; A. Raue et al., Bioinformatics 25 (2009) 1923-1929
 */
export function profileOf(settled: Settled, j: number, scale: ProfileScale, watch: Watch): Profile {
  const { problem, x, at } = settled;
  const gaps = delayWalks(problem.setup, x).flatMap(({ index, gap }) =>
    index === j || !(gap > 0) ? [] : [{ index, gap }],
  );
  const sides = ([-1, 1] as const).map((side) => new Side(problem, x, j, side, at, scale, gaps, watch).run());
  const [down, up] = sides;
  return {
    at: [...down.at.toReversed(), x[j], ...up.at],
    rise: [...down.rise.toReversed(), 0, ...up.rise],
    interval: [down.end, up.end],
    ends: [down.how, up.how],
  };
}

class Side {
  readonly at: number[] = [];
  readonly rise: number[] = [];
  private last: Float64Array;

  constructor(
    private readonly problem: Problem,
    x: Float64Array,
    private readonly j: number,
    private readonly side: -1 | 1,
    private readonly best: Evaluation,
    private readonly scale: ProfileScale,
    private readonly gaps: readonly { readonly index: number; readonly gap: number }[],
    private readonly watch: Watch,
  ) {
    this.last = x;
  }

  run(): { at: number[]; rise: number[]; end: number; how: ProfileEnd } {
    const { problem, j, side, scale } = this;
    const { from, to } = problem.setup.coordinates[j];
    const bound = side < 0 ? from : to;
    let inside = this.last[j];
    let step = scale.step / 2;
    const done = (end: number, how: ProfileEnd) => ({ at: this.at, rise: this.rise, end, how });
    for (let k = 0; k < mostSteps; k++) {
      if (inside === bound) return done(bound, "bound");
      if (this.watch.cancelled()) break;
      const u = side < 0 ? Math.max(bound, inside - step) : Math.min(bound, inside + step);
      const point = this.descendAt(u);
      if (!point || point.rise > scale.limit) return this.narrow(inside, u, point?.rise);
      const grown = point.rise - (this.rise.at(-1) ?? 0);
      this.keep(u, point);
      inside = u;
      // About eight steps to the limit; a flat profile is left in longer ones.
      if (grown < scale.limit / 16) step *= 2;
      else if (grown > scale.limit / 4) step /= 2;
    }
    return done(inside, "open");
  }

  /** The end between a point inside and one outside. */
  private narrow(inside: number, outside: number, riseOutside: number | undefined) {
    const { scale, side } = this;
    let rise = riseOutside;
    const small = 1e-3 * scale.step;
    while (Math.abs(outside - inside) > small && !this.watch.cancelled()) {
      const from = this.rise.at(-1) ?? 0;
      // Where it rises smoothly a straight line in the root of the rise hits the limit; where it jumps only halving helps.
      const share = (Math.sqrt(scale.limit) - Math.sqrt(from)) / (Math.sqrt(rise ?? Infinity) - Math.sqrt(from));
      const u = inside + (outside - inside) * (share > 0.1 && share < 0.9 ? share : 0.5);
      const point = this.descendAt(u);
      if (point && point.rise <= scale.limit) {
        this.keep(u, point);
        inside = u;
        if (scale.limit - point.rise < 1e-3 * scale.limit) break;
      } else {
        outside = u;
        rise = point?.rise;
      }
    }
    const reached = this.rise.at(-1) ?? 0;
    const jumps = rise !== undefined && rise - reached > scale.limit / 4;
    const how: ProfileEnd = rise === undefined ? "bound" : jumps || this.turnsUp(inside) ? "step" : "smooth";
    if (rise !== undefined && jumps) {
      this.at.push(outside);
      this.rise.push(rise);
    }
    const order = this.at.map((_, i) => i).sort((a, b) => side * (this.at[a] - this.at[b]));
    return { at: order.map((i) => this.at[i]), rise: order.map((i) => this.rise[i]), end: inside, how };
  }

  /** Is the profile t at its end several times as steep as linear theory has it? */
  private turnsUp(end: number): boolean {
    const { at, rise, scale } = this;
    const before = at.findLastIndex((u) => Math.abs(u - end) > 0.01 * scale.step);
    if (before < 0) return false;
    const steep = (Math.sqrt(rise.at(-1) ?? 0) - Math.sqrt(rise[before])) / Math.abs(end - at[before]);
    return steep * scale.step > 4;
  }

  private keep(u: number, point: { x: Float64Array; rise: number }): void {
    this.at.push(u);
    this.rise.push(point.rise);
    this.last = point.x;
  }

  /** The best of the others at a value of the coordinate, from where they were last; past the limit, from gaps beside as well. */
  private descendAt(u: number): { x: Float64Array; rise: number } | undefined {
    const { problem, j, scale, watch } = this;
    let best = this.from(withCoordinate(this.last, j, u));
    if (best && best.rise <= scale.limit) return best;
    for (const { index, gap } of this.gaps) {
      const { from, to } = problem.setup.coordinates[index];
      for (const gaps of [-1, 1]) {
        const v = this.last[index] + gaps * gap;
        if (v < from || v > to || watch.cancelled()) continue;
        const other = this.from(withCoordinate(withCoordinate(this.last, j, u), index, v));
        if (other && (!best || other.rise < best.rise)) best = other;
      }
    }
    return best;
  }

  private from(start: Float64Array): { x: Float64Array; rise: number } | undefined {
    if (!this.problem.evaluate(start)) return undefined;
    const end = descend(this.problem, start, closely, this.watch, this.j);
    const { variance, along } = this.scale;
    const rise = Math.max(0, end.sum - this.best.ofAll) / variance;
    const there = along && this.problem.evaluate(end.x)?.residuals.map((r, i) => r - this.best.residuals[i]);
    return { x: end.x, rise: along && there ? rise / along(there) : rise };
  }
}
