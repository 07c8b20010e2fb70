import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import { type Curve, type Family, followCurve, solveAt } from "../numerics/continuation.js";
import { blockMatrix } from "./block-matrix.js";
import { type Conditions, conditionsOf, type DutySettings } from "./conditions.js";
import type { GroupBalance } from "./group.js";
import type { Mode } from "./stability.js";
import { steadyStates } from "./states.js";
import { type SteadyState, summary } from "./summary.js";
import { Walk } from "./walk.js";

/** One input of a duty in a vessel that runs through a range. SI. */
export interface Along {
  readonly from: number;
  readonly to: number;
  /** The plant at a value; undefined where it does not balance. */
  plantAt(value: number): Plant | undefined;
  /** What the duty has in place of its values. */
  settingsAt(value: number): DutySettings;
}

export interface BranchPoint {
  /** Of the input, SI. */
  readonly at: number;
  readonly state: SteadyState;
  readonly stable: boolean | undefined;
}

/** Where something happens to a steady state as the input goes on. */
export interface Turn {
  /** Of the input, SI. */
  readonly at: number;
  /** `ignites`, `goes out`: a stable state ends, and the next is hotter, colder; `ends`: without heat, or where it is not known which side is stable; `swings`: it stays, but begins to swing; `gives way`: it stays, but any disturbance leads to another. */
  readonly what: "ignites" | "goes out" | "ends" | "swings" | "gives way";
  /** Whether it happens as the input rises or falls. */
  readonly as: "rises" | "falls";
  readonly state: SteadyState;
  /** Where on its branch: the number of the branch, and of its point, or of the one before. */
  readonly branch: number;
  readonly point: number;
}

export interface Branches {
  /** Steady states in the order in which they follow one another. */
  readonly branches: readonly (readonly BranchPoint[])[];
  readonly turns: readonly Turn[];
  /** What could not be followed, in words. */
  readonly left: readonly string[];
}

/** Unknowns up to which a whole network is followed, and its stability judged. */
const mostFollowed = 240;
const mostJudged = 60;
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
  const found: Curve[] = [];
  const left = new Set<string>();
  for (const p of seeds) {
    for (const y of vessel.statesAt(p, left)) {
      if (y.length !== size || found.some((curve) => liesOn(family, curve, y, p))) continue;
      const curve = bothWays(family, y, p);
      if (curve.end === "stuck") left.add("a branch that could not be followed to its end");
      if (curve.points.length > 1) found.push(curve);
    }
  }
  const branches = found.map((curve) => vessel.pointsOf(curve));
  return {
    branches: branches.map((b) => b.map(plain)),
    turns: branches.flatMap((b, k) => turnsOf(b, k, duty)),
    left: [...left],
  };
}

/** From a state to both ends of its curve, as one. */
function bothWays(family: Family, y: Float64Array, p: number): Curve {
  const up = followCurve(family, { y, p }, [0, 1], 1);
  if (up.end === "closed") return up;
  const down = followCurve(family, { y, p }, [0, 1], -1);
  const before = down.points.slice(1).reverse();
  const end = up.end === "left" && down.end === "left" ? "left" : "stuck";
  const points = [...before, ...up.points].filter((q, k, all) => k === 0 || q.p !== all[k - 1].p || q.turn);
  return { points, end };
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

interface Judged extends BranchPoint {
  readonly turn: boolean;
  readonly mode: Mode | undefined;
  /** Of all that decides, K; without heat undefined. */
  readonly warmth: number | undefined;
}

const plain = ({ at, state, stable }: Judged): BranchPoint => ({ at, state, stable });

/** A plant and its balances at each value of the input, in concentrations scaled alike at all of them. */
class Vessel {
  private readonly known = new Map<number, At | undefined>();
  private scale: Float64Array | undefined;

  constructor(
    private readonly duty: Duty,
    private readonly along: Along,
  ) {}

  private value(p: number): number {
    return this.along.from + p * (this.along.to - this.along.from);
  }

  at(p: number): At | undefined {
    if (this.known.size > 64) this.known.clear();
    if (!this.known.has(p)) this.known.set(p, this.make(p));
    return this.known.get(p);
  }

  private make(p: number): At | undefined {
    const plant = this.along.plantAt(this.value(p));
    if (!plant) return undefined;
    const conditions = conditionsOf(plant, this.duty.chemistry, this.duty, this.along.settingsAt(this.value(p)));
    if (!conditions.scale.every(Number.isFinite)) return undefined;
    this.scale ??= conditions.scale;
    const walk = new Walk(plant, conditions, undefined);
    const ratio = conditions.scale.map((s, i) => (this.scale as Float64Array)[i] / s);
    return { plant, conditions, walk, ratio, ...walk.whole() };
  }

  family(size: number, nodes: number): Family {
    const own = new Float64Array(size);
    const scaled = (y: Float64Array, { ratio }: At): Float64Array => {
      for (let k = 0; k < size; k++) own[k] = y[k] * ratio[k % ratio.length];
      return own;
    };
    return {
      size,
      weight: 1 / Math.sqrt(nodes),
      residual: (y, p, f) => {
        const at = this.at(p);
        if (!at || at.balance.count * at.balance.size !== size) return false;
        if (!at.balance.residual(scaled(y, at), f)) return false;
        for (let k = 0; k < size; k++) f[k] /= at.ratio[k % at.ratio.length];
        return f.every(Number.isFinite);
      },
      jacobian: (y, p, j) => {
        const at = this.at(p);
        if (!at) return false;
        const m = blockMatrix(at.balance.count, at.balance.size);
        if (!at.balance.jacobian(scaled(y, at), m)) return false;
        const n = at.balance.size;
        j.fill(0);
        m.rows.forEach((row, i) => {
          for (const [k, block] of row) {
            for (let e = 0; e < block.length; e++) {
              const [r, c] = [Math.floor(e / n), e % n];
              j[(i * n + r) * size + k * n + c] = (block[e] * at.ratio[c]) / at.ratio[r];
            }
          }
        });
        return true;
      },
    };
  }

  /** All states that a search finds at p, in the order of `whole`. */
  statesAt(p: number, left: Set<string>): Float64Array[] {
    const at = this.at(p);
    if (!at) return [];
    const { plant, nodes } = at;
    const found = steadyStates(plant, this.duty.chemistry, this.duty, this.along.settingsAt(this.value(p)));
    for (const what of found.left) left.add(what);
    const scale = this.scale as Float64Array;
    const n = scale.length;
    return found.states.map(({ state }) => {
      const species = state.species.length;
      return Float64Array.from({ length: nodes.length * n }, (_, k) => {
        const [node, i] = [nodes[Math.floor(k / n)], k % n];
        const si = i < species ? state.concentrations[node * species + i] : (state.temperatures?.[node] ?? Number.NaN);
        return si / scale[i];
      });
    });
  }

  /** Points of a curve as states, judged. */
  pointsOf({ points }: Curve): Judged[] {
    return points.flatMap(({ y, p, turn }) => {
      const at = this.at(p);
      if (!at) return [];
      const { nodes, behind, walk, conditions, plant } = at;
      const own = y.map((x, k) => Math.max(x * at.ratio[k % at.ratio.length], 0));
      const settled = walk.fork();
      settled.take(nodes, { y: own, residual: 0 });
      for (const group of behind) settled.pass(group);
      const mode = turn ? undefined : this.modeAt(settled);
      const state = summary(plant, conditions, settled);
      const warmth = state.temperatures && nodes.reduce((sum, k) => sum + (state.temperatures?.[k] ?? 0), 0);
      return [{ at: this.value(p), state, stable: mode && mode.growth < 0, mode, turn, warmth }];
    });
  }

  /** The mode of all groups that grows fastest; undefined where one was not judged and none grows. */
  private modeAt(settled: Walk): Mode | undefined {
    const { groups } = settled;
    if (groups.some((g) => g.length * (this.scale?.length ?? 1) > mostJudged)) return undefined;
    const modes = groups.map((group) => settled.modeOf(group)).filter((m) => m !== "settled");
    const known = modes.filter((m) => m !== undefined);
    const fastest = known.reduce<Mode | undefined>((a, m) => (a && a.growth >= m.growth ? a : m), undefined);
    return known.length === modes.length || (fastest && fastest.growth > 0) ? fastest : undefined;
  }
}

interface At {
  readonly plant: Plant;
  readonly conditions: Conditions;
  readonly walk: Walk;
  readonly balance: GroupBalance;
  /** Those that decide which states there are, and the groups that follow. */
  readonly nodes: Int32Array;
  readonly behind: readonly Int32Array[];
  /** Common scale over own scale, by component. */
  readonly ratio: Float64Array;
}

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
function turnsOf(points: readonly Judged[], branch: number, duty: Duty): Turn[] {
  return points.flatMap((point, k): Turn[] => {
    const [before, after] = [points[k - 1], points[k + 1]];
    if (point.turn && before && after) {
      // The side on which it is stable. Where that was not judged a branch that is stable at both ends is so on every other piece.
      const judged = before.stable !== undefined || after.stable !== undefined;
      const passed = points.slice(0, k).filter((q) => q.turn).length;
      const even = points.filter((q) => q.turn).length % 2 === 0;
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
