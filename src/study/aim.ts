import type { Aim } from "../model/aim.js";
import { crossings, type Looked, remembered, stretches, withPeak } from "../numerics/crossings.js";
import type { Figure } from "../reaction/figures.js";
import { betterIs } from "./direction.js";
import { type Input, rowWith } from "./inputs.js";
import { noRow, type Operation, operate, type Row, valuesAt } from "./operate.js";
import { type OtherStates, otherStates } from "./other-states.js";
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
  /** Where a search found further steady states, or could not look: over the range, and at the answer. */
  readonly others: readonly OtherStates[];
  readonly draws: number;
  readonly stopped: boolean;
}

/** A value of the input, and what the duty then gives. SI. */
export interface Reached {
  readonly at: number;
  readonly figure: Figure;
  /** Share of the draws that meet the aim there; undefined without draws. */
  readonly share: number | undefined;
  /** Two standard errors of that share, for so many draws were taken and no more; undefined without draws. */
  readonly shareError: number | undefined;
  /** With a confidence: what so many of the draws keep at least (or at most). */
  readonly kept: number | undefined;
}

/** Points of the first look; two crossings nearer than their distance can be missed. */
const looks = 33;
/** Values over the range at which further steady states are looked for. */
const searches = 9;
/** Points over each stretch in which the middle values meet the aim, where draws are looked at. */
const looksOverDraws = 5;

/**
 * The values of one input at which a figure of a duty meets an aim: looked for on a grid over the whole range, then found
 * by Brent's method; where the grid has none, the best point is looked around by golden section. With a confidence the
 * quantile of the figure over shared draws takes the place of its middle value, where the middle value meets the aim.
 */
export function solveAim(operation: Operation, aim: Aim, range: AimRange, options: AimOptions = {}): AimResult {
  const { rows = [], confidence } = options;
  const own: Operation = { ...operation, duty: { ...operation.duty, report: [aim.line] } };
  const better = betterIs(own.duty, 0) < 0 ? "<=" : ">=";
  const sure = rows.length > 0 ? confidence : undefined;
  const sign = aim.sign === "=" && sure !== undefined ? better : aim.sign;
  const { input, from, to, log } = range;
  const at = (share: number): number =>
    share <= 0 ? from : share >= 1 ? to : log ? from * (to / from) ** share : from + share * (to - from);
  const place = (share: number): Row => rowWith(noRow, [input], [at(share)]);
  // Above 0 where the aim is met; squashed, so that an infinite log-removal is a number too.
  const scale = Math.abs(aim.target.value) || 1;
  const over = (value: number): number => squashed((value - aim.target.value) * (sign === "<=" ? -1 : 1), scale);
  const whys = new Map<number, string>();
  let spent = 0;
  const middle = remembered((share) => {
    options.progress?.(Math.min(0.5, spent++ / (2 * looks)));
    const here = operate(own, place(share));
    if (here.cannot !== undefined) whys.set(share, here.cannot);
    return over(here.figures?.[0].value ?? Number.NaN);
  });
  const drawn = (share: number): number[] =>
    rows.map((row) => valuesAt(own, rowWith(row, [input], [at(share)]))?.[0] ?? Number.NaN);
  const kept = (share: number): number =>
    sure === undefined ? Number.NaN : keptBy(drawn(share), sure, sign === "<=" ? "<=" : ">=");
  const keptOver = remembered((share) => {
    options.progress?.(Math.min(0.99, 0.5 + spent++ / 100));
    return Number.isNaN(middle(share)) ? Number.NaN : over(kept(share));
  });
  const grid: Looked[] = [];
  for (const x of spaced(0, 1, looks, false)) {
    if (options.cancelled?.()) break;
    grid.push({ x, value: middle(x) });
  }
  const stopped = grid.length < looks;
  const first = stopped ? grid : looked(middle, grid, sign);
  const f = sure === undefined ? middle : keptOver;
  const seen = sure === undefined || stopped ? first : overStretches(first, keptOver);
  const zeros = stopped ? [] : crossings(f, seen, sure === undefined ? 0 : 1e-3 / looks);
  const reached = (share: number): Reached[] => {
    const figure = operate(own, place(share)).figures?.[0];
    if (!figure) return [];
    const values = drawn(share).filter((v) => !Number.isNaN(v));
    const side = (aim.sign === "=" ? better : aim.sign) === "<=" ? -1 : 1;
    // A draw that is the target itself meets it.
    const meeting = values.filter((v) => (v - aim.target.value) * side >= -1e-9 * scale).length;
    return [
      {
        at: at(share),
        figure,
        share: values.length > 0 ? meeting / values.length : undefined,
        shareError: values.length > 0 ? 2 * standardError(meeting, values.length) : undefined,
        kept: sure === undefined ? undefined : kept(share),
      },
    ];
  };
  const searched = (share: number): OtherStates[] => {
    const found = options.cancelled?.() ? undefined : otherStates(own, place(share), [at(share)]);
    return found ? [found] : [];
  };
  const rank = ({ value }: Looked): number => (sign === "=" ? -Math.abs(value) : value);
  const best = seen
    .filter((p) => !Number.isNaN(p.value))
    .reduce<Looked | undefined>((a, b) => (!a || rank(b) > rank(a) ? b : a), undefined);
  const inInput = ({ from: a, to: b }: Stretch): Stretch => ({ from: at(a), to: at(b) });
  return {
    aim,
    range,
    sign,
    confidence: sure,
    crossings: zeros.flatMap(reached),
    met: sign === "=" ? [] : stretches(seen, zeros, (v) => v >= 0).map(inInput),
    best: best && reached(best.x)[0],
    impossible: stretches(first, [], Number.isNaN).map((s) => ({
      ...inInput(s),
      why: whys.get(s.from) ?? "there is no figure",
    })),
    others: stopped ? [] : [...spaced(0, 1, searches, false), ...zeros].sort((a, b) => a - b).flatMap(searched),
    draws: rows.length,
    stopped,
  };
}

/** The grid with a peak that it steps over, and of `=` a trough as well. */
function looked(f: (x: number) => number, grid: readonly Looked[], sign: Aim["sign"]): Looked[] {
  const tolerance = 1e-6;
  const up = withPeak(f, grid, tolerance);
  if (sign !== "=") return up;
  const turned = up.map(({ x, value }) => ({ x, value: -value }));
  return withPeak((x) => -f(x), turned, tolerance).map(({ x, value }) => ({ x, value: -value }));
}

/**
 * Looks again, over the draws, where the middle values meet the aim, one point of the grid further on both sides; nowhere else
 * do nine in ten draws meet it. Where none does, at the best point alone.
 */
function overStretches(first: readonly Looked[], f: (x: number) => number): Looked[] {
  const met = stretches(first, [], (v) => v >= 0);
  if (met.length === 0) {
    const whole = first.filter((p) => !Number.isNaN(p.value));
    const best = whole.reduce<Looked | undefined>((a, b) => (!a || b.value > a.value ? b : a), undefined);
    return best ? [{ x: best.x, value: f(best.x) }] : [];
  }
  const places = met.flatMap(({ from, to }) => {
    const [before, after] = [first.findIndex((p) => p.x === from) - 1, first.findIndex((p) => p.x === to) + 1];
    return [
      ...(first[before] ? [first[before].x] : []),
      ...(from === to ? [from] : spaced(from, to, looksOverDraws, false)),
      ...(first[after] ? [first[after].x] : []),
    ];
  });
  return [...new Set(places)].sort((a, b) => a - b).map((x) => ({ x, value: f(x) }));
}

/** What a share of the draws keeps: at least, or with `<=` at most. NaN where a tenth of the draws or more give no figure. */
function keptBy(drawn: readonly number[], confidence: number, sign: ">=" | "<="): number {
  const sorted = drawn.filter((v) => !Number.isNaN(v)).sort((a, b) => a - b);
  if (sorted.length < 0.9 * drawn.length || sorted.length < fewestDraws) return Number.NaN;
  return quantile(sorted, sign === "<=" ? confidence : 1 - confidence);
}

const fewestDraws = 20;

const squashed = (x: number, scale: number): number =>
  Number.isFinite(x) ? x / (Math.abs(x) + scale) : Number.isNaN(x) ? x : Math.sign(x);

/** Standard error of a share of draws, by the rule that adds two draws of each sort (A. Agresti, B.A. Coull, Am. Stat. 52 (1998) 119-126, from memory). */
function standardError(meeting: number, draws: number): number {
  const share = (meeting + 2) / (draws + 4);
  return Math.sqrt((share * (1 - share)) / (draws + 4));
}
