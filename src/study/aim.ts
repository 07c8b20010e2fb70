import type { Aim } from "../model/aim.js";
import { crossings, type Looked, remembered, stretches } from "../numerics/crossings.js";
import type { Figure } from "../reaction/figures.js";
import { asideOf, keptBy, looked, overStretches, squashed, standardError } from "./aim-looks.js";
import type { AimRange, Stretch } from "./aim-range.js";
import { betterIs } from "./direction.js";
import { rowWith } from "./inputs.js";
import { type JumpFound, jumpsAlong } from "./jumps.js";
import { metByAll, metByStable } from "./met-by-all.js";
import { noRow, type Operation, operate, type Row, valuesAt } from "./operate.js";
import { type OtherStates, otherStates } from "./other-states.js";
import { spaced, type Watch } from "./sweep.js";
import { type WashOutFound, washOutsAlong } from "./wash-outs.js";

export type { AimRange, Stretch } from "./aim-range.js";

export interface AimOptions extends Watch {
  /** Draws of what is unsure. */
  readonly rows?: readonly Row[];
  /** Share of the draws that shall meet the aim, 0 to 1; undefined: at the middle values. */
  readonly confidence?: number;
}

export interface AimResult {
  readonly operation: Operation;
  readonly aim: Aim;
  readonly range: AimRange;
  /** As asked; with `=` and a confidence the better side is meant. */
  readonly sign: Aim["sign"];
  readonly confidence: number | undefined;
  /** Where the figure, or with a confidence its quantile, is the target; ascending. */
  readonly crossings: readonly Reached[];
  /** Where the aim is met; empty where it is `=`. */
  readonly met: readonly Stretch[];
  /** The same in every stable steady state that was found; undefined where there is but one, or it was not followed. */
  readonly metByAll: readonly Stretch[] | undefined;
  /** Where another state that lasts meets it, while the followed one is unstable and meets it nowhere; undefined elsewhere. */
  readonly metByStable: readonly Stretch[] | undefined;
  /** Where the figure jumps at the middle values. */
  readonly jumps: readonly JumpFound[];
  /** Where something is washed out. */
  readonly washOuts: readonly WashOutFound[];
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
  const values = new Map<number, number>();
  let spent = 0;
  const middle = remembered((share) => {
    options.progress?.(Math.min(0.5, spent++ / (2 * looks)));
    const here = operate(own, place(share));
    if (here.cannot !== undefined) whys.set(share, here.cannot);
    const value = here.figures?.[0].value ?? Number.NaN;
    values.set(share, value);
    return over(value);
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
  const near = sure === undefined ? 1e-8 : 1e-3 / looks;
  const edges = stopped
    ? []
    : crossings(f, seen, sure === undefined ? 0 : near).map((zero) => asideOf(f, zero, seen, near));
  const zeros = edges.flatMap((e) => (sign === "=" && e.over ? [] : [e.x]));
  const reached = (share: number): Reached[] => {
    const figure = operate(own, place(share)).figures?.[0];
    if (!figure) return [];
    const drawnThere = drawn(share).filter((v) => !Number.isNaN(v));
    const side = (aim.sign === "=" ? better : aim.sign) === "<=" ? -1 : 1;
    // A draw that is the target itself meets it.
    const meeting = drawnThere.filter((v) => (v - aim.target.value) * side >= -1e-9 * scale).length;
    return [
      {
        at: at(share),
        figure,
        share: drawnThere.length > 0 ? meeting / drawnThere.length : undefined,
        shareError: drawnThere.length > 0 ? 2 * standardError(meeting, drawnThere.length) : undefined,
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
  const met = sign === "=" ? [] : stretches(seen, zeros, (v) => v >= 0).map(inInput);
  const others = stopped ? [] : [...spaced(0, 1, searches, false), ...zeros].sort((a, b) => a - b).flatMap(searched);
  const told = [...values].map(([share, value]) => ({ x: at(share), values: [value] }));
  const jumps = stopped ? [] : jumpsAlong(own, input, told, noRow, options.cancelled);
  return {
    operation,
    aim,
    range,
    sign,
    confidence: sure,
    crossings: zeros.flatMap(reached),
    met,
    metByAll: stopped || met.length === 0 ? undefined : metByAll(own, aim, range, met, others),
    metByStable: stopped || met.length > 0 || sign === "=" ? undefined : metByStable(own, aim, range, others),
    jumps,
    washOuts: stopped || options.cancelled?.() ? [] : washOutsAlong(own, input, [from, to], others),
    best: best && reached(best.x)[0],
    impossible: stretches(first, [], Number.isNaN).map((s) => ({
      ...inInput(s),
      why: whys.get(s.from) ?? "there is no figure",
    })),
    others,
    draws: rows.length,
    stopped,
  };
}
