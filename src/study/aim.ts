import type { Aim } from "../model/aim.js";
import type { Duty } from "../model/duty.js";
import { goldenSection } from "../numerics/golden-section.js";
import { brent } from "../numerics/roots.js";
import type { Figure } from "../reaction/figures.js";
import { betterIs } from "./direction.js";
import { type Input, rowWith } from "./inputs.js";
import { noRow, type Operation, operate, type Row, valuesAt } from "./operate.js";
import { quantile } from "./spread.js";
import { spaced, type Watch } from "./sweep.js";

/** Where to look for a value that meets an aim. SI. */
export interface AimRange {
  readonly input: Input;
  readonly from: number;
  readonly to: number;
  readonly log: boolean;
}

export interface AimOptions extends Watch {
  /** Draws of what is unsure. */
  readonly rows?: readonly Row[];
  /** Share of the draws that shall meet the aim, 0 to 1; undefined: at the middle values. */
  readonly confidence?: number;
}

/** A stretch of the range in which the aim is met. SI. */
export interface Stretch {
  readonly from: number;
  readonly to: number;
}

export interface AimResult {
  readonly aim: Aim;
  readonly range: AimRange;
  /** As asked; with `=` and a confidence the better side is meant. */
  readonly sign: Aim["sign"];
  readonly confidence: number | undefined;
  /** Where the figure, or with a confidence its quantile, is the target; ascending. */
  readonly crossings: readonly Reached[];
  /** Where the aim is met; empty where it is `=`. */
  readonly met: readonly Stretch[];
  /** The point that comes nearest; where the aim is met, the best. */
  readonly best: Reached | undefined;
  /** Stretches in which no vessel is possible, with a reason. */
  readonly impossible: readonly (Stretch & { readonly why: string })[];
  readonly draws: number;
  readonly stopped: boolean;
}

/** A value of the input, and what the duty then gives. SI. */
export interface Reached {
  readonly at: number;
  readonly figure: Figure;
  /** Share of the draws that meet the aim there; undefined without draws. */
  readonly share: number | undefined;
  /** With a confidence: what so many of the draws keep at least (or at most). */
  readonly kept: number | undefined;
}

/** Points of the first look; two crossings nearer than their distance can be missed. */
const looks = 33;
const looksOverDraws = 17;

/**
 * The values of one input at which a figure of a duty meets an aim: looked for on a grid over the whole range, then found
 * by Brent's method; where the grid has none, the best point is sought for by golden section and looked around.
 * With a confidence the quantile of the figure over shared draws takes the place of its middle value.
 */
export function solveAim(operation: Operation, aim: Aim, range: AimRange, options: AimOptions = {}): AimResult {
  const duty: Duty = { ...operation.duty, report: [aim.line] };
  const own: Operation = { ...operation, duty };
  const { rows = [], confidence } = options;
  const overDraws = confidence !== undefined && rows.length > 0;
  const sign = aim.sign === "=" && overDraws ? (betterIs(duty, 0) < 0 ? "<=" : ">=") : aim.sign;
  const upward = sign === "<=" ? -1 : 1;
  const { input, from, to, log } = range;
  const count = overDraws ? looksOverDraws : looks;
  let spent = 0;
  const at = (share: number): number =>
    share <= 0 ? from : share >= 1 ? to : log ? from * (to / from) ** share : from + share * (to - from);
  const drawnAt = (x: number): number[] =>
    rows.map((row) => valuesAt(own, rowWith(row, [input], [x]))?.[0] ?? Number.NaN);
  const whys = new Map<number, string>();
  const valueAt = (x: number): number => {
    options.progress?.(Math.min(0.99, spent++ / (2 * count)));
    const here = operate(own, rowWith(noRow, [input], [x]));
    if (here.cannot !== undefined) whys.set(x, here.cannot);
    if (!here.figures) return Number.NaN;
    return overDraws ? keptBy(drawnAt(x), confidence, sign) : here.figures[0].value;
  };
  // Above 0 where the aim is met; squashed, so that an infinite log-removal is a number too.
  const scale = Math.abs(aim.target.value) || 1;
  const over = (share: number): number => squashed((valueAt(at(share)) - aim.target.value) * upward, scale);
  const grid = spaced(0, 1, count, false);
  const seen: [share: number, over: number][] = [];
  for (const share of grid) {
    if (options.cancelled?.()) break;
    seen.push([share, over(share)]);
  }
  const stopped = seen.length < grid.length;
  // A peak (of `=`: a trough as well) between two points of the grid may touch what the grid does not.
  const turns = sign === "=" ? [1, -1] : [1];
  for (const turn of turns) {
    if (stopped || seen.some(([, v]) => v * turn >= 0)) continue;
    const top = seen.reduce((a, b) => (b[1] * turn > a[1] * turn || Number.isNaN(a[1]) ? b : a), seen[0]);
    const step = 1 / (count - 1);
    const [low, high] = [Math.max(0, top[0] - step), Math.min(1, top[0] + step)];
    const peak = goldenSection((s) => over(s) * turn, low, high, overDraws ? 1e-3 : 1e-6);
    if (peak.value > top[1] * turn) seen.push([peak.x, peak.value * turn]);
  }
  seen.sort((a, b) => a[0] - b[0]);
  const zeros: number[] = [];
  for (let k = 0; k < seen.length; k++) {
    const [share, value] = seen[k];
    if (value === 0) zeros.push(share);
    if (k === 0) continue;
    const [before, was] = seen[k - 1];
    if (!(was * value < 0)) continue;
    const zero = brent(over, before, share, overDraws ? 1e-5 : 0);
    if (typeof zero === "number") zeros.push(zero);
  }
  const reached = (share: number): Reached | undefined => {
    const x = at(share);
    const { figures } = operate(own, rowWith(noRow, [input], [x]));
    if (!figures) return undefined;
    const drawn = rows.length > 0 ? drawnAt(x).filter((v) => !Number.isNaN(v)) : [];
    const ofSign = aim.sign === "=" ? (betterIs(duty, 0) < 0 ? -1 : 1) : upward;
    // A draw that is the target itself meets it.
    const slack = 1e-9 * scale;
    return {
      at: x,
      figure: figures[0],
      share:
        drawn.length > 0
          ? drawn.filter((v) => (v - aim.target.value) * ofSign >= -slack).length / drawn.length
          : undefined,
      kept: overDraws ? keptBy(drawn, confidence, sign) : undefined,
    };
  };
  const nearest = (sign === "=" ? seen.map(([s, v]) => [s, -Math.abs(v)] as const) : seen).filter(
    ([, v]) => !Number.isNaN(v),
  );
  const top = nearest.reduce<readonly [number, number] | undefined>((a, b) => (!a || b[1] > a[1] ? b : a), undefined);
  return {
    aim,
    range,
    sign,
    confidence: overDraws ? confidence : undefined,
    crossings: zeros.flatMap((z) => reached(z) ?? []),
    met: sign === "=" ? [] : stretches(seen, zeros, (v) => v >= 0).map(([a, b]) => ({ from: at(a), to: at(b) })),
    best: top && reached(top[0]),
    impossible: stretches(seen, [], Number.isNaN).map(([a, b]) => ({
      from: at(a),
      to: at(b),
      why: whys.get(at(a)) ?? "there is no figure",
    })),
    draws: rows.length,
    stopped,
  };
}

/** What a share of the draws keeps: at least, or with `<=` at most. NaN where a tenth of the draws or more give no figure. */
function keptBy(drawn: readonly number[], confidence: number, sign: Aim["sign"]): number {
  const sorted = drawn.filter((v) => !Number.isNaN(v)).sort((a, b) => a - b);
  if (sorted.length < 0.9 * drawn.length || sorted.length < 20) return Number.NaN;
  return quantile(sorted, sign === "<=" ? confidence : 1 - confidence);
}

const squashed = (x: number, scale: number): number =>
  Number.isFinite(x) ? x / (Math.abs(x) + scale) : Number.isNaN(x) ? x : Math.sign(x);

/** Runs of points that are so, their ends carried to the zeros that lie between them and their neighbours. */
function stretches(
  seen: readonly (readonly [share: number, value: number])[],
  zeros: readonly number[],
  so: (value: number) => boolean,
): [number, number][] {
  const found: [number, number][] = [];
  for (let k = 0; k < seen.length; k++) {
    if (!so(seen[k][1])) continue;
    const first = k;
    while (k + 1 < seen.length && so(seen[k + 1][1])) k++;
    const before = first > 0 ? zeros.find((z) => z >= seen[first - 1][0] && z <= seen[first][0]) : undefined;
    const after = k + 1 < seen.length ? zeros.find((z) => z >= seen[k][0] && z <= seen[k + 1][0]) : undefined;
    found.push([before ?? seen[first][0], after ?? seen[k][0]]);
  }
  return found;
}
