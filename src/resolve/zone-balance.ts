import type { Terminal, ZoneTable } from "../compartments/zone-table.js";
import { adjacency, reachable } from "../numerics/graph.js";
import { reconcileFlows } from "../numerics/reconcile.js";
import type { Report } from "../problems/report.js";
import type { CellNames } from "../read/cells.js";
import type { Span } from "../text/source.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import type { Cells, FlowRows } from "./zone-cells.js";

/** What a document says of a zoned body beside its tables. */
export interface ZoneSettings {
  readonly name: string;
  readonly at: Span;
  readonly follow: boolean;
  readonly tolerance: number;
  readonly flowUnit: Unit;
  readonly volumeUnit: Unit;
}

/** Out of balance by more than this, relative, is more than the last digits of a table. */
const usualTolerance = 1e-9;
/** By less than this it is the rounding of sums. */
const rounding = 1e-14;

/**
 * Puts the two tables together: every cell in balance, what no flow reaches still.
 * @returns undefined where a cell is out of balance, or no flow enters or leaves; reported
 */
export function balanceZones(
  cells: Cells,
  rows: FlowRows,
  settings: ZoneSettings,
  report: Report,
): ZoneTable | undefined {
  const { name, at } = settings;
  if (rows.inlets.count === 0) report("zone-terminals", at, { name, side: "enters" });
  if (rows.outlets.count === 0) report("zone-terminals", at, { name, side: "leaves" });
  if (rows.inlets.count === 0 || rows.outlets.count === 0 || !rowsOnce(cells, rows, report)) return undefined;
  const reached = withoutStill(cells, rows, settings, report);
  const worst = balanced(cells, reached, settings, report);
  if (worst === undefined) return undefined;
  const inlets = sums(reached.from, reached.flow, rows.inlets.count);
  let { flow } = reached;
  if (worst > rounding) {
    const size = cells.volume.length;
    const changed = reconcileFlows({ size, ...reached }, { inlets, outlets: undefined });
    if (changed === "impossible") {
      report("zone-irreconcilable", at, { name });
      return undefined;
    }
    if (worst > usualTolerance) {
      const most = changed.reduce((m, q, k) => Math.max(m, Math.abs(q / flow[k] - 1)), 0);
      report("zone-reconciled", at, { name, worst: percent(worst), most: percent(most) });
    }
    flow = changed;
  }
  return {
    volume: cells.volume,
    from: reached.from,
    to: reached.to,
    flow,
    inlets: terminals(rows.inlets, inlets, rows),
    outlets: terminals(rows.outlets, sums(reached.to, flow, rows.outlets.count), rows),
    follow: settings.follow,
    tolerance: settings.tolerance,
    names: cells.names,
    units: [settings.volumeUnit, settings.flowUnit].map((unit) => ({ unit })),
  };
}

type Links = Pick<FlowRows, "from" | "to" | "flow">;

/** The same two cells stand in one row only. */
function rowsOnce(
  { names, volume }: Cells,
  { table, from, to, at, inlets, outlets }: FlowRows,
  report: Report,
): boolean {
  const cells = volume.length;
  const tail = from.map((i) => (i >= 0 ? i : cells - 1 - i));
  const { start, edges } = adjacency(cells + inlets.count, tail);
  const earlier = new Int32Array(cells + outlets.count).fill(-1);
  let [twice, first, others] = [-1, -1, 0];
  for (let i = 0; i < start.length - 1; i++) {
    for (let e = start[i]; e < start[i + 1]; e++) {
      const k = edges[e];
      const head = to[k] >= 0 ? to[k] : cells - 1 - to[k];
      const before = earlier[head];
      if (before >= start[i]) {
        if (twice >= 0) others++;
        else [twice, first] = [k, edges[before]];
      }
      earlier[head] = e;
    }
  }
  if (twice < 0) return true;
  const nameOf = (end: number, terminals: CellNames): string =>
    end >= 0 ? names.nameOf(end) : terminals.nameOf(-1 - end);
  const data = { from: nameOf(from[twice], inlets), to: nameOf(to[twice], outlets), others };
  const place = (k: number): Span => table.span(at[k], at[k] + 1);
  report("zone-row-twice", place(twice), data, { at: place(first), says: "it stands here first" });
  return false;
}

/** Rows among cells that no inlet reaches are left out: nothing enters there, so it is dead volume; said. */
function withoutStill(
  { table, names, volume }: Cells,
  { from, to, flow, inlets }: FlowRows,
  { name, volumeUnit }: ZoneSettings,
  report: Report,
): Links {
  const cells = volume.length;
  const tail = from.map((i) => (i >= 0 ? i : cells - 1 - i));
  // Outlets lead nowhere: all of them are one more node.
  const size = cells + inlets.count + 1;
  const head = to.map((i) => (i >= 0 ? i : size - 1));
  const sources = Array.from({ length: inlets.count }, (_, k) => cells + k);
  const seen = reachable({ size, from: tail, to: head }, sources);
  let [still, held, first] = [0, 0, -1];
  for (let i = cells - 1; i >= 0; i--) {
    if (seen[i]) continue;
    still++;
    held += volume[i];
    first = i;
  }
  if (still === 0) return { from, to, flow };
  const data = { name, cells: still, first: names.nameOf(first), volume: formatQuantity(held, volumeUnit) };
  report("zone-still", table.span(...names.boundsOf(first)), data);
  const kept = Int32Array.from(from.keys()).filter((k) => seen[tail[k]]);
  return { from: kept.map((k) => from[k]), to: kept.map((k) => to[k]), flow: Float64Array.from(kept, (k) => flow[k]) };
}

/** The largest imbalance of a cell, relative to what passes it; undefined where it is over the tolerance: reported. */
function balanced(
  { table, names, volume }: Cells,
  { from, to, flow }: Links,
  { name, tolerance, flowUnit }: ZoneSettings,
  report: Report,
): number | undefined {
  const enters = new Float64Array(volume.length);
  const leaves = new Float64Array(volume.length);
  for (let k = 0; k < flow.length; k++) {
    if (from[k] >= 0) leaves[from[k]] += flow[k];
    if (to[k] >= 0) enters[to[k]] += flow[k];
  }
  let [worst, at, over] = [0, 0, 0];
  for (let i = 0; i < volume.length; i++) {
    if (enters[i] === leaves[i]) continue;
    const off = Math.abs(enters[i] - leaves[i]) / Math.max(enters[i], leaves[i]);
    if (off > tolerance) over++;
    if (off > worst) [worst, at] = [off, i];
  }
  if (over === 0) return worst;
  report("zone-unbalanced", table.span(...names.boundsOf(at)), {
    name,
    cell: names.nameOf(at),
    enters: formatQuantity(enters[at], flowUnit, 9),
    leaves: formatQuantity(leaves[at], flowUnit, 9),
    off: percent(worst),
    tolerance: percent(tolerance),
    others: over - 1,
  });
  return undefined;
}

/** What the rows of each terminal add to. */
function sums(ends: Int32Array, flow: Float64Array, count: number): Float64Array {
  const sum = new Float64Array(count);
  for (let k = 0; k < flow.length; k++) if (ends[k] < 0) sum[-1 - ends[k]] += flow[k];
  return sum;
}

const terminals = (names: CellNames, flow: Float64Array, { table }: FlowRows): Terminal[] =>
  Array.from(flow, (q, k): Terminal => ({ name: names.nameOf(k), flow: q, at: table.span(...names.boundsOf(k)) }));

const percent = (share: number): string => `${Number((share * 100).toPrecision(2))} %`;
