import { lowDiscrepancy } from "../numerics/low-discrepancy.js";
import { runInto } from "./dynamics.js";
import type { GroupBalance } from "./group.js";
import type { Kinetics } from "./kinetics.js";
import { settleMixed } from "./mixed.js";
import { type NewtonResult, solveNewton, solveNewtonFrom } from "./newton.js";
import { type Mode, slowestMode } from "./stability.js";

/** A steady state of nodes that feed one another. */
export interface GroupState {
  readonly y: Float64Array;
  readonly residual: number;
  /** Undefined where it was not judged. */
  readonly mode: Mode | undefined;
  /** Does a vessel filled with the unreacted mixture run into it? */
  readonly reached: boolean;
}

/** What a search looks through. */
export interface Range {
  /** Reactions of the group's cells, no walls. */
  readonly cell: Kinetics;
  /** Temperatures, scaled, between which to look; undefined without heat. */
  readonly temperatures: readonly [number, number] | undefined;
}

/** How many starts of each sort; fewer where every step is a walk through bodies, still fewer where these have an inside of their own. */
const many = { temperatures: 48, mixtures: 24, patterns: 32 };
const few = { temperatures: 8, mixtures: 2, patterns: 4 };
const fewest = { temperatures: 8, mixtures: 0, patterns: 6 };
/** Nodes of a group that is followed in time where Newton's method does not get on. */
const mostFollowed = 60;
/** Two states that are nearer to one another than this, scaled, are one. */
const same = 1e-6;

/**
 * All steady states of a group that Newton's method finds from many starts: filled with the unreacted mixture; one tank at each
 * of many temperatures, reacted as far as it gets there; mixtures reacted by arbitrary extents; such states drawn for every
 * node by itself. What has not been found is not proven not to be there.
 * @param first the state that the unreacted mixture runs into, as far as it came
 */
export function groupStates(
  balance: GroupBalance,
  range: Range,
  first: Float64Array,
  result: NewtonResult,
): GroupState[] {
  const size = (y: Float64Array): number => sizeOf(y, balance.size, range.temperatures !== undefined);
  const found: { y: Float64Array; residual: number; reached: boolean }[] = [];
  const add = (y: Float64Array, { converged, residual }: NewtonResult, reached = false): void => {
    if (!converged || !y.every(Number.isFinite)) return;
    if (found.some((f) => f.y.every((x, i) => Math.abs(x - y[i]) <= same * (1 + Math.abs(x))))) return;
    found.push({ y, residual, reached });
  };
  add(first, result, true);
  for (const start of startsFor(balance, range)) {
    const y = start.slice();
    add(y, solveNewtonFrom(balance, y, balance.onlyCells ? 40 : 25));
  }
  return found.map((f) => ({ ...f, mode: slowestMode(balance, f.y) })).sort((a, b) => size(a.y) - size(b.y));
}

/** What states are put in order by: the temperature where there is one, else what is there in all. */
function sizeOf(y: Float64Array, n: number, thermal: boolean): number {
  let sum = 0;
  for (let k = 0; k < y.length; k++) if (!thermal || k % n === n - 1) sum += y[k];
  return sum;
}

/**
 * Newton's method from the unreacted mixture, by way of time where it has far to go; where neither gets there, from the starts
 * of a search.
 */
export function settleGroup(balance: GroupBalance, y: Float64Array, byTime: boolean, range: () => Range): NewtonResult {
  const mixture = y.slice();
  const follow = byTime && balance.onlyCells;
  if (follow) runInto(balance, y);
  const result = solveNewton(balance, y);
  if (result.converged || balance.count > mostFollowed) return result;
  if (balance.onlyCells && !follow) {
    const again = mixture.slice();
    runInto(balance, again);
    const second = solveNewton(balance, again);
    if (second.converged) y.set(again);
    if (second.converged) return second;
  }
  for (const start of startsFor(balance, range())) {
    const third = solveNewtonFrom(balance, start, balance.onlyCells ? 40 : 25);
    if (!third.converged || !start.every(Number.isFinite)) continue;
    y.set(start);
    return third;
  }
  return result;
}

function* startsFor(balance: GroupBalance, { cell, temperatures: between }: Range): Generator<Float64Array> {
  const { count, size: n, meanTime } = balance;
  const { temperatures, mixtures, patterns } = balance.onlyCells ? many : balance.slow ? fewest : few;
  const mixed = balance.mixed();
  if (!mixed) return;
  const pool: Float64Array[] = [];
  const everywhere = (state: Float64Array): Float64Array =>
    Float64Array.from({ length: count * n }, (_, e) => state[e % n]);
  const fed = mixed.subarray(0, n);
  if (between) {
    const frozen = withoutHeat(cell);
    let last: Float64Array | undefined;
    for (let k = 0; k < temperatures; k++) {
      const T = between[0] + ((between[1] - between[0]) * (k + 0.5)) / temperatures;
      const entering = fed.slice();
      entering[n - 1] = T;
      const y = (last ?? entering).slice();
      y[n - 1] = T;
      last = settleMixed(frozen, entering, meanTime, y) ? y : undefined;
      if (last) pool.push(last);
    }
  }
  pool.push(...reacted(cell, fed, between, mixtures));
  for (const state of pool) yield everywhere(state);
  if (count < 2 || pool.length === 0) return;
  const draw = lowDiscrepancy(Math.min(count, 40), 1);
  for (let k = 0; k < patterns; k++) {
    const at = draw();
    yield Float64Array.from({ length: count * n }, (_, e) => {
      const node = Math.floor(e / n);
      return pool[Math.floor(at[node % at.length] * pool.length)][e % n];
    });
  }
}

/** Mixtures that have reacted by extents drawn at random, none below zero. */
function reacted(cell: Kinetics, fed: Float64Array, between: Range["temperatures"], count: number): Float64Array[] {
  const n = cell.size;
  const rows = cell.numbers.slice(0, 40);
  if (rows.length === 0) return [];
  const draw = lowDiscrepancy(rows.length, 2);
  const species = cell.thermal ? n - 1 : n;
  return Array.from({ length: count }, () => {
    const y = fed.slice();
    draw().forEach((share, r) => {
      let most = Number.POSITIVE_INFINITY;
      for (let i = 0; i < species; i++) if (rows[r][i] < 0) most = Math.min(most, y[i] / -rows[r][i]);
      if (!Number.isFinite(most)) most = 1 / Math.max(...rows[r].map(Math.abs));
      for (let i = 0; i < n; i++) y[i] += share * most * rows[r][i];
    });
    if (between) y[n - 1] = Math.min(Math.max(y[n - 1], between[0]), between[1]);
    return y.map((x) => Math.max(x, 0));
  });
}

/** The same with a temperature that stays what it is. */
function withoutHeat(inside: Kinetics): Kinetics {
  const t = inside.size - 1;
  return {
    ...inside,
    production(y, at, out, to) {
      inside.production(y, at, out, to);
      out[to + t] = 0;
    },
    jacobian(y, at, out, to) {
      inside.jacobian(y, at, out, to);
      out.fill(0, to + t * inside.size, to + (t + 1) * inside.size);
    },
  };
}
