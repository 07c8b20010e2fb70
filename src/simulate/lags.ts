import type { SparseRows } from "../numerics/sparse.js";
import { sparseRows } from "../numerics/sparse.js";
import type { LinearSystem, Query } from "./linear-system.js";

/**
 * Turns first-order detectors into states of the system: y' = (c - y) / lag, one for every query that has a lag and is
 * chosen. The others stay as they are.
 */
export function lagsAsStates(
  system: LinearSystem,
  queries: readonly Query[],
  chosen: (lag: number) => boolean,
): { system: LinearSystem; queries: readonly Query[] } {
  const rows = rowMaps(system.rates);
  const input = [...system.input];
  const changed = queries.map((q): Query => {
    const { lag, states, weights, direct } = q.signal;
    if (lag === undefined || !chosen(lag)) return q;
    const state = rows.length;
    const row = new Map<number, number>([[state, -1 / lag]]);
    states.forEach((s, i) => {
      row.set(s, (row.get(s) ?? 0) + weights[i] / lag);
    });
    rows.push(row);
    input.push(direct / lag);
    return { ...q, signal: { states: Int32Array.of(state), weights: Float64Array.of(1), direct: 0 } };
  });
  if (rows.length === system.input.length) return { system, queries };
  return { system: { rates: sparseRows(rows), input: Float64Array.from(input) }, queries: changed };
}

/** The rows of a sparse matrix as maps column -> value. */
export function rowMaps(a: SparseRows): Map<number, number>[] {
  return Array.from({ length: a.size }, (_, i) => {
    const row = new Map<number, number>();
    for (let k = a.start[i]; k < a.start[i + 1]; k++) row.set(a.column[k], a.value[k]);
    return row;
  });
}
