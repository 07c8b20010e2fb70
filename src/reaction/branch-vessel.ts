import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { Curve, Family } from "../numerics/continuation.js";
import { blockMatrix } from "./block-matrix.js";
import type { Along, BranchPoint } from "./branch-types.js";
import { type Conditions, conditionsOf } from "./conditions.js";
import type { GroupBalance } from "./group.js";
import type { Mode } from "./stability.js";
import { steadyStates } from "./states.js";
import { summary } from "./summary.js";
import { Walk } from "./walk.js";

/** Unknowns up to which stability is judged along a branch. */
const mostJudged = 60;

/** A point with what its turns are told by. */
export interface Judged extends BranchPoint {
  readonly turn: boolean;
  readonly mode: Mode | undefined;
  /** Of all that decides, K; without heat undefined. */
  readonly warmth: number | undefined;
}

/** A plant and its balances at each value of the input, in concentrations scaled alike at all of them. */
export class Vessel {
  private readonly known = new Map<number, At | undefined>();
  private scale: Float64Array | undefined;

  constructor(
    private readonly duty: Duty,
    private readonly along: Along,
  ) {}

  /** Components of a mixture, and how many of them are concentrations. */
  get mixture(): { readonly size: number; readonly species: number } {
    const species = this.duty.chemistry?.species.length ?? 0;
    return { size: species + (this.duty.heat ? 1 : 0), species };
  }

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
