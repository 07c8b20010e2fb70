import { fTail } from "../numerics/distributions.js";
import type { Block } from "./observations.js";
import type { FittedReading, LackOfFit } from "./result.js";

/** What a lack of fit is told from. */
export interface Replicated {
  /** Blocks of which each point should be as the others' at the same time. */
  readonly families: readonly (readonly number[])[];
  readonly blocks: readonly Block[];
  /** One per block. */
  readonly readings: readonly FittedReading[];
  /** Linear terms of each block. */
  readonly terms: readonly number[];
  /** Weighted sum of squares that the fit leaves, priors included, and its degrees of freedom. */
  readonly left: { readonly sum: number; readonly freedom: number };
}

/** Standard deviations of a correlation that chance gives. */
const sure = 2;

/**
 * Readings of one moment: in one table, or in tables of tests under the same conditions, at one place and the same time since the
 * injection. What they differ by is error alone, whatever the network; if the fit misses them by more, the network is wrong. Where
 * the differences hang together from one moment to the next, both sums have fewer degrees of freedom.
 * @returns undefined where there are none
 * @see N. R. Draper, H. Smith, Applied Regression Analysis, 3rd ed. 1998, section 2.1; D. M. Bates, D. G. Watts, Nonlinear Regression Analysis and Its
 * Applications, Wiley 1988, section 3.12 (both from memory)
 */
export function lackOfFit(of: Replicated): LackOfFit | undefined {
  const { families, blocks, readings, left } = of;
  let [sum, freedom, count, moments] = [0, 0, 0, 0];
  let [square, product, pairs] = [0, 0, 0];
  for (const family of families) {
    const groups = momentsOf(family, blocks).filter((g) => g.length > 1);
    if (groups.length === 0) continue;
    const logs = new Set(groups.flat().map(({ b }) => b));
    let own = groups.reduce((n, g) => n + g.length - 1, 0);
    // Levels and drifts of further logs were fitted to them.
    const fitted = [...logs].slice(1).reduce((n, b) => n + of.terms[b], 0);
    if (own <= fitted) continue;
    own -= fitted;
    const last = new Map<number, number>();
    for (const group of groups) {
      const values = group.map(({ b, i }) => readings[b].residual[i] * readings[b].weight[i]);
      const mean = values.reduce((s, v) => s + v, 0) / values.length;
      for (const [k, { b }] of group.entries()) {
        const off = values[k] - mean;
        sum += off * off;
        const before = last.get(b);
        if (before !== undefined) {
          product += off * before;
          pairs++;
        }
        square += off * off;
        last.set(b, off);
      }
    }
    freedom += own;
    count += groups.reduce((n, g) => n + g.length, 0);
    moments += groups.length;
  }
  const rest = { sum: Math.max(0, left.sum - sum), freedom: left.freedom - freedom };
  // Rows that were copied are no repeats.
  if (!(sum > 1e-20 * left.sum) || rest.freedom < 1) return undefined;
  const lag1 = pairs > 0 ? product / pairs / (square / count) : 0;
  const correlation = lag1 * Math.sqrt(pairs) > sure ? Math.min(lag1, 0.99) : 0;
  const share = (1 - correlation ** 2) / (1 + correlation ** 2);
  const f = rest.sum / rest.freedom / (sum / freedom);
  return {
    readings: count,
    moments,
    pure: { sum, freedom },
    lack: rest,
    f,
    p: fTail(f, rest.freedom * share, freedom * share),
    correlation,
  };
}

interface Point {
  readonly b: number;
  readonly i: number;
  readonly since: number;
}

/** Points of a family by moments, in the order of time since the injection. */
function momentsOf(family: readonly number[], blocks: readonly Block[]): Point[][] {
  const points = family.flatMap((b) =>
    Array.from(
      blocks[b].time,
      (t, i): Point => ({ b, i, since: blocks[b].declared.of?.steady ? 0 : t - blocks[b].origin }),
    ),
  );
  points.sort((p, q) => p.since - q.since || p.b - q.b || p.i - q.i);
  const near = 1e-6 * Math.max(...points.map((p) => Math.abs(p.since)), 0);
  const groups: Point[][] = [];
  for (const p of points) {
    const group = groups[groups.length - 1];
    if (group && p.since - group[group.length - 1].since <= near) group.push(p);
    else groups.push([p]);
  }
  return groups;
}
