import type { SparseRows } from "../numerics/sparse.js";

/**
 * The answer of a plant to tracer entering at one node, written without delays: x' = A x + input * w(u), with w the
 * tracer rate (kg/s, mol/s, ...) and u the time since the tracer passed the tubes that lead to a state. States are
 * concentrations.
 */
export interface LinearSystem {
  readonly rates: SparseRows;
  /** 1/m3: what a unit of rate does to each state. */
  readonly input: Float64Array;
}

/** A concentration as a sum over states, plus a part that goes undispersed: weights . x(u) + direct * w(u). 1/m3 in `direct`·s. */
export interface Signal {
  readonly states: Int32Array;
  readonly weights: Float64Array;
  readonly direct: number;
  /** s: seen through a first-order detector that held nothing before. */
  readonly lag?: number;
}

/** A signal that is seen `delay` seconds late: at clock time t it shows its value at u = t - delay. */
export interface Passage extends Signal {
  readonly delay: number;
}

/**
 * Tracer entering: `amount` all at once at u = 0, and a rate that is linear between break points
 * (level + slope * (u - time) from each time to the next; 0 before the first). `times` ascending.
 */
export interface Drive {
  readonly amount: number;
  readonly times: Float64Array;
  readonly level: Float64Array;
  readonly slope: Float64Array;
}

/** What to read: a signal at local times (ascending, s; negative ones read 0). */
export interface Query {
  readonly signal: Signal;
  readonly times: Float64Array;
  /** Is the integral wanted too? It costs about as much again. */
  readonly integral: boolean;
}

/** Values and time integrals of each query; the undispersed part of an instant amount is in the integral only. */
export interface Answer {
  readonly value: Float64Array;
  readonly integral: Float64Array;
}

/** Times closer than this, relative, are one: how far rounding may part two ways to the same sum of delays. */
export const sameTime = 2e-12;

/** Time since something came, s: what comes at t but for rounding has just come, as a value at a jump is the limit from the right. */
export function since(t: number, came: number): number {
  const u = t - came;
  return u < 0 && u >= -sameTime * came ? 0 : u;
}

/** One way to integrate a linear system. All engines keep this promise and are tested by one contract. */
export interface TracerEngine {
  readonly name: string;
  run(
    system: LinearSystem,
    drive: Drive,
    queries: readonly Query[],
  ): { answers: Answer[]; stopped: string | undefined };
}

/** No rate at all: only an instant amount. */
export const instant = (amount: number): Drive => ({
  amount,
  times: new Float64Array(0),
  level: new Float64Array(0),
  slope: new Float64Array(0),
});

/** A constant rate from u = 0 for `lasting` seconds (for ever where undefined). */
export function constantRate(rate: number, lasting?: number): Drive {
  const times = lasting === undefined ? [0] : [0, lasting];
  return {
    amount: 0,
    times: Float64Array.from(times),
    level: Float64Array.from(times, (_, i) => (i === 0 ? rate : 0)),
    slope: new Float64Array(times.length),
  };
}

/** w(u), right-continuous, and its integral from 0 to u, the instant amount included. */
export function driveAt(drive: Drive, u: number): { rate: number; total: number } {
  if (u < 0) return { rate: 0, total: 0 };
  let total = drive.amount;
  let rate = 0;
  for (let i = 0; i < drive.times.length && drive.times[i] <= u; i++) {
    const end = Math.min(u, drive.times[i + 1] ?? Number.POSITIVE_INFINITY);
    const h = end - drive.times[i];
    total += h * (drive.level[i] + (drive.slope[i] * h) / 2);
    rate = drive.level[i] + drive.slope[i] * h;
  }
  return { rate, total };
}
