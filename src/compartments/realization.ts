import { type SparseRows, sparseRows } from "../numerics/sparse.js";
import type { Pockets } from "./pockets.js";

/**
 * A block in time, for engines that integrate: with u what enters, as it was before the last `delay` m3 came in,
 *
 *     x' = Q (A x + b u) + S x,    outflow = c x + d u,    held behind the delay = g x
 *
 * Q the through-flow, m3/s. States are concentrations: where u stays at 1, all of them come to 1.
 */
export interface Realization {
  /** m3 that must enter before anything leaves. */
  readonly delay: number;
  /** A, 1/m3. */
  readonly through: SparseRows;
  /** S, 1/s: what goes on at any flow. */
  readonly still: SparseRows;
  /** b, 1/m3. */
  readonly input: Float64Array;
  /** c, and d: 0 where there is no delay. */
  readonly output: Float64Array;
  readonly direct: number;
  /** g, m3. */
  readonly held: Float64Array;
  /** Derivatives by which the outflow is smoother than what enters. */
  readonly smooths: number;
  /** True where it holds at the flow that it was made for only. */
  readonly steadyOnly?: true;
}

/** Everything so many times as slow: s times the factor for s. */
export function slowedRealization(r: Realization, factor: number): Realization {
  const slower = (a: SparseRows): SparseRows => ({ ...a, value: a.value.map((x) => x / factor) });
  return {
    ...r,
    delay: r.delay * factor,
    through: slower(r.through),
    still: slower(r.still),
    input: r.input.map((b) => b / factor),
    held: r.held.map((g) => g * factor),
  };
}

/**
 * s + loss for s, what leaves then times `kept`: states fade by the loss. What is held is not told: it does not all leave.
 * @param loss 1/s
 */
export function lossyRealization(r: Realization, loss: number, kept: number): Realization {
  const rows = r.input.length;
  const still = Array.from({ length: rows }, (_, i) => {
    const row = new Map<number, number>([[i, -loss]]);
    for (let k = r.still.start[i]; k < r.still.start[i + 1]; k++) {
      row.set(r.still.column[k], (row.get(r.still.column[k]) ?? 0) + r.still.value[k]);
    }
    return row;
  });
  return {
    ...r,
    still: sparseRows(still),
    output: r.output.map((c) => c * kept),
    direct: r.direct * kept,
    held: new Float64Array(rows).fill(Number.NaN),
    steadyOnly: true,
  };
}

/** The same in a body of volume 1 at a flow of 1, without pockets: dx/dv = A x + b u, v the volume displaced. */
export interface UnitRealization {
  readonly rates: readonly ReadonlyMap<number, number>[];
  readonly input: Float64Array;
  readonly output: Float64Array;
  readonly held: Float64Array;
  readonly smooths: number;
  /** Share of the volume that is a delay before it; default 0. The states have the whole volume for unit all the same. */
  readonly delay?: number;
}

/**
 * A unit realization at its volume (above 0). Pockets give every state a partner, x' = ... - q (x - p) / V and
 * p' = q (x - p) / h: in s that is s V -> s V + s q h / (q + s h), just what pockets do to the formula of a block.
 */
export function realizationAt(unit: UnitRealization, volume: number, pockets: Pockets | undefined): Realization {
  const n = unit.input.length;
  const size = pockets ? 2 * n : n;
  const through = Array.from({ length: size }, (_, i) => {
    return i < n ? new Map([...unit.rates[i]].map(([j, a]): [number, number] => [j, a / volume])) : new Map();
  });
  const still = Array.from({ length: size }, () => new Map<number, number>());
  const input = new Float64Array(size);
  const output = new Float64Array(size);
  const held = new Float64Array(size);
  for (let i = 0; i < n; i++) {
    input[i] = unit.input[i] / volume;
    output[i] = unit.output[i];
    held[i] = unit.held[i] * volume;
    if (!pockets) continue;
    const out = pockets.exchange / volume;
    const back = pockets.exchange / pockets.volume;
    still[i].set(i, -out).set(n + i, out);
    still[n + i].set(i, back).set(n + i, -back);
    held[n + i] = unit.held[i] * pockets.volume;
  }
  return {
    delay: (unit.delay ?? 0) * volume,
    through: sparseRows(through),
    still: sparseRows(still),
    input,
    output,
    direct: 0,
    held,
    smooths: unit.smooths,
  };
}
