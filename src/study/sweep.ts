import type { Figure } from "../reaction/figures.js";
import { isCount, withCounts } from "./counts.js";
import { type Input, rowWith } from "./inputs.js";
import { type JumpFound, jumpsAlong } from "./jumps.js";
import { noRow, type Operation, operate, type Row, valuesAt } from "./operate.js";
import { type OtherStates, otherStates, someOf } from "./other-states.js";
import { interval95 } from "./spread.js";
import { type WashOutFound, washOutsAlong } from "./wash-outs.js";

/** One input of a sweep and its values, SI. */
export interface Axis {
  readonly input: Input;
  readonly values: readonly number[];
  readonly log: boolean;
}

export interface SweepPoint {
  /** One value per axis, SI. */
  readonly at: readonly number[];
  /** Undefined where the vessel cannot be: `cannot` says why. */
  readonly figures: readonly Figure[] | undefined;
  readonly cannot: string | undefined;
  /** Per figure, over the draws at this point; undefined where nothing is unsure. */
  readonly intervals: readonly (readonly [number, number] | undefined)[];
}

export interface Sweep {
  readonly operation: Operation;
  readonly axes: readonly Axis[];
  /** The last axis runs fastest. */
  readonly points: readonly SweepPoint[];
  /** Where a search found further steady states, or could not look, at some of the points. */
  readonly others: readonly OtherStates[];
  /** Where figures jump along the first axis, between points that no line may join. */
  readonly jumps: readonly SweepJump[];
  /** Where something is washed out over the one input of a sweep. */
  readonly washOuts: readonly WashOutFound[];
  readonly draws: number;
  readonly stopped: boolean;
}

/** A jump along the first axis, at one value of the second (SI; undefined where there is none). */
export interface SweepJump extends JumpFound {
  readonly beside: number | undefined;
}

export interface Watch {
  readonly cancelled?: () => boolean;
  /** 0 to 1. */
  readonly progress?: (done: number) => void;
}

/** Points of a sweep at which further steady states are looked for. */
const mostSearched = 15;

/**
 * The reported figures of a duty over one or two of its inputs. The same draws serve every point, so that a curve and its
 * band are as smooth as the vessel; what is swept keeps the `±` that it declares at each point.
 * @param rows draws of what is unsure; none: no intervals
 */
export function sweep(operation: Operation, axes: readonly Axis[], rows: readonly Row[], watch: Watch = {}): Sweep {
  const inputs = axes.map((a) => a.input);
  const places = axes.reduce<number[][]>((all, a) => all.flatMap((at) => a.values.map((v) => [...at, v])), [[]]);
  const points: SweepPoint[] = [];
  for (const [k, at] of places.entries()) {
    if (watch.cancelled?.()) break;
    watch.progress?.(k / places.length);
    const there = withCounts(operation, inputs, at);
    if (typeof there === "string") {
      points.push({ at, figures: undefined, cannot: there, intervals: [] });
      continue;
    }
    const put = (row: Row): Row => withMoved(row, inputs, at);
    const here = operate(there, put(noRow));
    const drawn = here.figures ? rows.map((row) => valuesAt(there, put(row))) : [];
    points.push({
      at,
      figures: here.figures,
      cannot: here.cannot,
      intervals: (here.figures ?? []).map((_, i) => interval95(drawn.map((v) => v?.[i] ?? Number.NaN))),
    });
  }
  const others = someOf(points, mostSearched).flatMap(({ at, figures }) => {
    if (!figures || watch.cancelled?.()) return [];
    const there = withCounts(operation, inputs, at);
    return typeof there === "string" ? [] : (otherStates(there, withMoved(noRow, inputs, at), at) ?? []);
  });
  const stopped = points.length < places.length;
  const jumps = stopped ? [] : jumpsOf(operation, axes, points, watch);
  const [{ input, values }] = axes;
  const washOuts =
    stopped || axes.length > 1 || isCount(input) || watch.cancelled?.()
      ? []
      : washOutsAlong(operation, input, [values[0], values[values.length - 1]], others);
  return { operation, axes, points, others, jumps, washOuts, draws: rows.length, stopped };
}

/** A row with those inputs at values that do not make another network. */
function withMoved(row: Row, inputs: readonly Input[], at: readonly number[]): Row {
  const moved = inputs.flatMap((input, k) => (isCount(input) ? [] : [{ input, at: at[k] }]));
  return rowWith(
    row,
    moved.map((m) => m.input),
    moved.map((m) => m.at),
  );
}

function jumpsOf(
  operation: Operation,
  [first, second]: readonly Axis[],
  points: readonly SweepPoint[],
  { cancelled }: Watch,
): SweepJump[] {
  // Whole steps are nothing but jumps.
  if (isCount(first.input)) return [];
  return (second?.values ?? [undefined]).flatMap((beside) => {
    const own = beside === undefined ? operation : withCounts(operation, [second.input], [beside]);
    if (typeof own === "string") return [];
    const along = points.flatMap(({ at, figures }) =>
      at[1] === beside && figures ? [{ x: at[0], values: figures.map((f) => f.value) }] : [],
    );
    const row = beside === undefined ? noRow : withMoved(noRow, [second.input], [beside]);
    return jumpsAlong(own, first.input, along, row, cancelled).map((jump) => ({ ...jump, beside }));
  });
}

/** `count` values from one end to the other, both exact; in equal ratios where `log`. */
export function spaced(from: number, to: number, count: number, log: boolean): number[] {
  return Array.from({ length: count }, (_, i) => {
    if (i === 0) return from;
    if (i === count - 1) return to;
    const share = i / (count - 1);
    return log ? from * (to / from) ** share : from + share * (to - from);
  });
}
