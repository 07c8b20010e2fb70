import type { Duty } from "../model/duty.js";
import type { Branches, Turn } from "./branch-types.js";
import type { Judged } from "./branch-vessel.js";
import type { SteadyState } from "./summary.js";

/**
 * What comes first as the input rises, and as it falls, from a state: of the turns of its branch the nearest either way along
 * it, as far as the input goes on the same way. Undefined where there is none in the range.
 */
export function nextTurns(
  { branches, turns }: Branches,
  now: number,
  state: SteadyState,
): { readonly rising: Turn | undefined; readonly falling: Turn | undefined } {
  let best: { branch: number; point: number; away: number } | undefined;
  branches.forEach((points, branch) => {
    points.forEach((point, k) => {
      if (k === 0 || (points[k - 1].at - now) * (point.at - now) > 0) return;
      const before = points[k - 1];
      const nearer = Math.abs(before.at - now) < Math.abs(point.at - now) ? before : point;
      const away = apart(nearer.state, state);
      if (!best || away < best.away) best = { branch, point: k, away };
    });
  });
  const { branch, point } = best ?? { branch: -1, point: -1 };
  const own = turns.filter((t) => t.branch === branch);
  const forward = own.filter((t) => t.point >= point).sort((a, b) => a.point - b.point)[0];
  const backward = own.filter((t) => t.point < point).sort((a, b) => b.point - a.point)[0];
  const either = [forward, backward].filter((t) => t !== undefined);
  return { rising: either.find((t) => t.at >= now), falling: either.find((t) => t.at < now) };
}

/** How far two states are apart, everywhere in the vessel. */
function apart(a: SteadyState, b: SteadyState): number {
  const n = a.species.length;
  const scale = a.species.map((_, i) => a.concentrations.reduce((m, c, k) => (k % n === i && c > m ? c : m), 1e-300));
  let sum = 0;
  const add = (x: number): void => {
    if (Number.isFinite(x)) sum += x * x;
  };
  a.concentrations.forEach((c, k) => {
    add((c - b.concentrations[k]) / scale[k % n]);
  });
  a.temperatures?.forEach((t, k) => {
    add((t - (b.temperatures?.[k] ?? Number.NaN)) / 100);
  });
  return sum;
}

/** Where stable states end, and where they begin to swing. */
export function turnsOf(points: readonly Judged[], branch: number, duty: Duty): Turn[] {
  return points.flatMap((point, k): Turn[] => {
    const [before, after] = [points[k - 1], points[k + 1]];
    if (point.turn && before && after) {
      // The side on which it is stable. Where that was not judged a branch that is stable at both ends is so on every other piece.
      const judged = before.stable !== undefined || after.stable !== undefined;
      const passed = points.slice(1, k).filter((q) => q.turn).length;
      const even = points.slice(1, -1).filter((q) => q.turn).length % 2 === 0;
      const second = judged ? after.stable === true && before.stable !== true : passed % 2 === 1;
      const [from, to] = second ? [after, before] : [before, after];
      if (from.stable === false) return [];
      const as = from.at < point.at ? "rises" : "falls";
      const hotter = (to.warmth ?? 0) > (from.warmth ?? 0);
      const what = duty.heat && (judged || even) ? (hotter ? "ignites" : "goes out") : "ends";
      return [{ at: point.at, state: point.state, as, what, branch, point: k }];
    }
    if (!after || after.turn || point.turn || point.stable === undefined || after.stable === undefined) return [];
    if (point.stable === after.stable) return [];
    const [from, to] = point.stable ? [point, after] : [after, point];
    const what = (to.mode?.swing ?? 0) > 0 ? "swings" : "gives way";
    const [a, b] = [from.mode?.growth ?? 0, to.mode?.growth ?? 0];
    const at = from.at + ((to.at - from.at) * a) / (a - b);
    return [{ at, state: from.state, as: from.at < to.at ? "rises" : "falls", what, branch, point: k }];
  });
}
