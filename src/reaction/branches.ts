import type { Duty } from "../model/duty.js";
import { type Curve, type Family, followCurve, solveAt } from "../numerics/continuation.js";
import type { Along, Branches, BranchPoint, Turn } from "./branch-types.js";
import { type Judged, Vessel } from "./branch-vessel.js";
import { turnsOf } from "./turns.js";
import { type WashOut, washOut } from "./wash-out.js";

export type { Along, Branches, BranchPoint, Turn } from "./branch-types.js";
export { nextTurns } from "./turns.js";

/** Unknowns up to which a whole network is followed. */
const mostFollowed = 240;
/** Values of the input at which all states are searched for, to begin with. */
const seeds = [0, 0.25, 0.5, 0.75, 1];

/**
 * All steady states over a range of one input, as far as they hang together with those that a search finds at five values of
 * it: followed by the length of their curve past the points where they end, which are located.
 * @see H.B. Keller (1977), beside the method; A. Uppal, W.H. Ray, A.B. Poore, Chem. Eng. Sci. 29 (1974) 967-985 (from memory)
 */
export function branchesAlong(duty: Duty, along: Along): Branches {
  const nothing = (why: string): Branches => ({ branches: [], turns: [], left: [why] });
  const vessel = new Vessel(duty, along);
  const first = vessel.at(0.5) ?? vessel.at(0) ?? vessel.at(1);
  if (!first) return nothing("the vessel does not balance in this range");
  const size = first.balance.count * first.balance.size;
  if (size > mostFollowed) return nothing(`${size} unknowns, more than are followed together`);
  const family = vessel.family(size, first.balance.count);
  const found: Whole[] = [];
  const left = new Set<string>();
  for (const p of seeds) {
    for (const y of vessel.statesAt(p, left)) {
      if (y.length !== size || found.some((curve) => liesOn(family, curve, y, p))) continue;
      const curve = bothWays(family, y, p, vessel.mixture);
      if (curve.end === "stuck") left.add("a branch that could not be followed to its end");
      if (curve.points.length > 1) found.push(curve);
    }
  }
  const branches = found.map((curve) => vessel.pointsOf(curve));
  const washed = found.flatMap((curve, k) => washedOut(curve, branches[k], k, duty));
  const near = 1e-3 * Math.abs(along.to - along.from);
  const turns = branches.flatMap((b, k) => turnsOf(b, k, duty));
  return {
    branches: branches.map((b) => b.map(plain)),
    turns: [
      ...washed,
      // The state without it gives way at the same place: told as exactly.
      ...turns.map((turn) => {
        const same = turn.what === "gives way" && washed.find((w) => Math.abs(w.at - turn.at) < near);
        return same ? { ...turn, at: same.at } : turn;
      }),
    ],
    left: [...left],
  };
}

/** A curve with what goes to nothing at its ends. */
interface Whole extends Curve {
  readonly first: WashOut | undefined;
  readonly last: WashOut | undefined;
}

/** From a state to both ends of its curve, as one. */
function bothWays(family: Family, y: Float64Array, p: number, mixture: Vessel["mixture"]): Whole {
  const up = followCurve(family, { y, p }, [0, 1], 1);
  if (up.end === "closed") return { ...up, first: undefined, last: undefined };
  const down = followCurve(family, { y, p }, [0, 1], -1);
  const [first, last] = [down, up].map((side) => (side.end === "stuck" ? washOut(side.points, mixture) : undefined));
  const whole = (up.end === "left" || last) && (down.end === "left" || first);
  const before = [...down.points.slice(1), ...(first ? [first.end] : [])].reverse();
  const after = [...up.points, ...(last ? [last.end] : [])];
  const points = [...before, ...after].filter((q, k, all) => k === 0 || q.p !== all[k - 1].p || q.turn);
  return { points, end: whole ? "left" : "stuck", first, last };
}

/** The ends of a branch at which something is washed out. */
function washedOut({ first, last }: Whole, points: readonly Judged[], branch: number, { chemistry }: Duty): Turn[] {
  const names = chemistry?.species.map((s) => s.name) ?? [];
  const turn = (out: WashOut | undefined, point: number, beside: Judged | undefined): Turn[] => {
    const { at, state } = points[point] ?? {};
    if (!out || !beside || at === undefined || !state) return [];
    const of = out.components.map((i) => names[i]).join(", ");
    return [{ at, what: "washes out", of, as: at > beside.at ? "rises" : "falls", state, branch, point }];
  };
  return [...turn(first, 0, points[1]), ...turn(last, points.length - 1, points[points.length - 2])];
}

/** Does a curve pass through a state? */
function liesOn(family: Family, { points }: Curve, y: Float64Array, p: number): boolean {
  const near = (a: Float64Array, tolerance: number): boolean => a.every((x, i) => Math.abs(x - y[i]) < tolerance);
  return points.some((b, k) => {
    if (k === 0) return false;
    const a = points[k - 1];
    if ((a.p - p) * (b.p - p) > 0) return false;
    const share = a.p === b.p ? 0 : (p - a.p) / (b.p - a.p);
    const between = a.y.map((x, i) => x + share * (b.y[i] - x));
    if (!near(between, 0.05)) return false;
    const exact = solveAt(family, between, p);
    return exact === undefined ? near(between, 1e-3) : near(exact, 1e-6);
  });
}

const plain = ({ at, state, stable }: Judged): BranchPoint => ({ at, state, stable });
