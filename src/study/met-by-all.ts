import type { Aim } from "../model/aim.js";
import type { BranchPoint } from "../reaction/branches.js";
import { figuresOf } from "../reaction/figures.js";
import type { AimRange, Stretch } from "./aim-range.js";
import { rowWith } from "./inputs.js";
import { followable } from "./jumps.js";
import { noRow, type Operation, plantOf } from "./operate.js";
import type { OtherStates } from "./other-states.js";
import { statesAlong } from "./states-along.js";

/**
 * Where an aim is met whichever stable steady state the vessel runs at: of the stretches in which the followed state meets it,
 * without those in which another one that lasts (or was not judged) does not.
 * @param own the operation, reporting the figure of the aim alone
 * @returns undefined where no other state was found that misses the aim, or they are too many to follow
 */
export function metByAll(
  own: Operation,
  aim: Aim,
  range: AimRange,
  met: readonly Stretch[],
  others: readonly OtherStates[],
): Stretch[] | undefined {
  const over = (value: number): number => (value - aim.target.value) * (aim.sign === "<=" ? -1 : 1);
  const missing = others.some((o) =>
    o.states.some((s) => !s.reached && s.stable !== false && over(s.figures[0].value) < 0),
  );
  if (!missing || !followable(own, noRow)) return undefined;
  return without(
    met,
    stretchesOf(
      own,
      range,
      (figure) => -over(figure),
      (stable) => stable !== false,
    ),
  );
}

/**
 * Where another state, one that lasts, meets an aim that the followed state meets nowhere.
 * @param own the operation, reporting the figure of the aim alone
 * @returns undefined where the followed state lasts wherever another meets the aim, or they are too many to follow
 */
export function metByStable(
  own: Operation,
  aim: Aim,
  range: AimRange,
  others: readonly OtherStates[],
): Stretch[] | undefined {
  const over = (value: number): number => (value - aim.target.value) * (aim.sign === "<=" ? -1 : 1);
  const meeting = others.some(
    ({ states }) =>
      states.some((s) => s.reached && s.stable === false) &&
      states.some((s) => !s.reached && s.stable === true && over(s.figures[0].value) >= 0),
  );
  if (!meeting || !followable(own, noRow)) return undefined;
  const found = joined(stretchesOf(own, range, over, (stable) => stable === true));
  return found.length > 0 ? found : undefined;
}

/** Stretches of the input over which a state that counts by its stability has a figure that makes `over` more than 0. */
function stretchesOf(
  own: Operation,
  { input, from, to }: AimRange,
  over: (figure: number) => number,
  counts: (stable: boolean | undefined) => boolean,
): Stretch[] {
  const { branches } = statesAlong(own, input, [from, to]);
  const value = ({ at, state }: BranchPoint): number => {
    const { plant } = plantOf(own, rowWith(noRow, [input], [at]));
    return plant ? over(figuresOf(plant, own.duty, state)[0].value) : Number.NaN;
  };
  return branches.flatMap((points) => {
    const lasting = points.map((p) => counts(p.stable));
    const values = points.map((p, k) => (lasting[k] ? value(p) : Number.NaN));
    return points.flatMap((p, k): Stretch[] => {
      const before = points[k - 1];
      if (!before || !lasting[k] || !lasting[k - 1]) return [];
      const [a, b] = [values[k - 1], values[k]];
      if (a <= 0 && b <= 0) return [];
      // Points lie close: where the figure passes the target between two of them, a straight line tells well enough.
      const zero = before.at + ((p.at - before.at) * a) / (a - b);
      const [s, e] = a > 0 && b > 0 ? [before.at, p.at] : a > 0 ? [before.at, zero] : [zero, p.at];
      return [{ from: Math.min(s, e), to: Math.max(s, e) }];
    });
  });
}

/** Stretches that touch or overlap, as one; ascending. */
function joined(stretches: readonly Stretch[]): Stretch[] {
  const all: Stretch[] = [];
  for (const s of [...stretches].sort((a, b) => a.from - b.from)) {
    const last = all.at(-1);
    if (!last || s.from > last.to) all.push(s);
    else all[all.length - 1] = { from: last.from, to: Math.max(last.to, s.to) };
  }
  return all;
}

/** Stretches without what others take out of them. */
function without(stretches: readonly Stretch[], out: readonly Stretch[]): Stretch[] {
  return out.reduce<Stretch[]>(
    (left, gone) =>
      left.flatMap(({ from, to }) => {
        if (gone.to <= from || gone.from >= to) return [{ from, to }];
        const parts = [
          { from, to: gone.from },
          { from: gone.to, to },
        ];
        return parts.filter((p) => p.to > p.from);
      }),
    [...stretches],
  );
}
