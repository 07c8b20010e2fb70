import { tableInflow, type ZoneTable } from "../compartments/zone-table.js";
import type { Network } from "../model/network.js";
import { reconcileFlows } from "../numerics/reconcile.js";
import type { Report } from "../problems/report.js";
import { dimensions } from "../units/dimension.js";
import type { Say } from "./say.js";
import type { SolvedStream } from "./solved-stream.js";

/** Relative; closer than this, streams and table agree but for rounding. */
const rounding = 1e-14;

/**
 * Every zoned body with the flows of its table scaled to what streams bring: by compartment, in file order, made when
 * asked for. Without `follow: inflow` they must bring what the table says.
 * @returns undefined where they do not; reported
 */
export function zoneFlows(
  network: Network,
  streams: readonly SolvedStream[],
  report: Report,
  say: Say,
): ReadonlyMap<number, () => ZoneTable> | undefined {
  const zoned = new Map<number, () => ZoneTable>();
  let good = true;
  network.compartments.forEach((c, i) => {
    if (!c.zones) return;
    const { zones, name } = c;
    const place = network.feeds.length + i;
    const into = (terminal: string) => streams.filter((s) => s.to === place && s.stream.enters === terminal);
    const enters = Float64Array.from(zones.inlets, (t) => into(t.name).reduce((sum, s) => sum + s.flow, 0));
    const total = enters.reduce((sum, q) => sum + q, 0);
    const factor = total / tableInflow(zones);
    const text = (q: number) => say(q, dimensions.flow);
    zones.inlets.forEach((t, k) => {
      const wanted = zones.follow ? t.flow * factor : t.flow;
      if (Math.abs(enters[k] - wanted) <= zones.tolerance * Math.max(enters[k], wanted)) return;
      good = false;
      const data = { name, inlet: t.name, brings: text(enters[k]), table: text(t.flow), shares: zones.follow };
      report("zone-inflow", into(t.name)[0]?.stream.at ?? c.at, data, { at: t.at, says: "the table names it here" });
    });
    if (!good) return;
    const agree = zones.inlets.every((t, k) => Math.abs(enters[k] - t.flow * factor) <= rounding * enters[k]);
    if (agree) zoned.set(i, () => scaled(zones, factor));
    else {
      const flow = rebalanced(zones, enters, factor);
      if (flow !== "impossible") zoned.set(i, () => ({ ...zones, flow }));
      else {
        good = false;
        report("zone-irreconcilable", c.at, { name });
      }
    }
  });
  return good ? zoned : undefined;
}

const scaled = (zones: ZoneTable, factor: number): ZoneTable =>
  factor === 1 ? zones : { ...zones, flow: zones.flow.map((q) => q * factor) };

/** Where the inlets' flows are not quite in the proportion of the table. */
function rebalanced(zones: ZoneTable, enters: Float64Array, factor: number): Float64Array | "impossible" {
  const { from, to, flow } = scaled(zones, factor);
  const outlets = Float64Array.from(zones.outlets, (t) => t.flow * factor);
  return reconcileFlows({ size: zones.volume.length, from, to, flow }, { inlets: enters, outlets });
}
