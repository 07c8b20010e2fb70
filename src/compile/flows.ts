import type { ZoneTable } from "../compartments/zone-table.js";
import { isClosed, type Network, type Stream } from "../model/network.js";
import { type Adjacency, adjacency, stronglyConnected } from "../numerics/graph.js";
import type { Report } from "../problems/report.js";
import type { Span } from "../text/source.js";
import { dimensions } from "../units/dimension.js";
import type { Say } from "./say.js";
import type { SolvedStream } from "./solved-stream.js";
import { type Branches, solveThrough } from "./through-flows.js";
import { zoneFlows } from "./zone-flows.js";

/** Solved steady flows, m3/s. */
export interface Flows {
  /** Through-flow of every place, exchange left out: feeds, then compartments, then outlets, in file order. */
  readonly through: Float64Array;
  /** Streams in file order, feeds' first: indices of places, and the flow. */
  readonly streams: readonly SolvedStream[];
  /** Zoned bodies with their flows scaled to what enters, by compartment. */
  readonly zoned: ReadonlyMap<number, () => ZoneTable>;
}

/** What of the flows does not depend on values: found once where a network is balanced many times. */
export interface FlowPlan {
  /** Feeds, then compartments, then outlets, in file order. */
  readonly places: readonly Place[];
  /** One branch per stream, feeds' first. */
  readonly streams: readonly Stream[];
  readonly from: Int32Array;
  readonly to: Int32Array;
  /** Groups of places in flow order. */
  readonly groups: readonly Int32Array[];
  readonly into: Adjacency;
  /** Where values say how outflow divides: the place, and the number of its first stream. All else sends all that it has. */
  readonly dividing: readonly { readonly node: Dividing; readonly first: number }[];
}

type Dividing = Pick<Network["compartments"][number], "name" | "streams" | "toAt">;

export function flowPlan(network: Network): FlowPlan {
  const places: Place[] = [...network.feeds, ...network.compartments, ...network.outlets];
  const index = new Map(places.map((p, i) => [p.name, i]));
  const nodes = [...network.feeds, ...network.compartments];
  const streams = nodes.flatMap((n) => n.streams);
  const from = Int32Array.from(nodes.flatMap((n, i) => n.streams.map(() => i)));
  const to = Int32Array.from(streams, (s) => index.get(s.to) as number);
  const size = places.length;
  let first = 0;
  const dividing = nodes.flatMap((node) => {
    const at = first;
    first += node.streams.length;
    return node.streams.some((s) => "value" in s.split) ? [{ node, first: at }] : [];
  });
  const groups = stronglyConnected({ size, from, to });
  return { places, streams, from, to, groups, into: adjacency(size, to), dividing };
}

/**
 * Steady flows of every stream. Groups of places are taken in flow order (Tarjan 1972): what is fed forward is plain
 * substitution, only circles need a small linear solve.
 * @returns undefined where a flow cannot be found; the reason is in `report`
 */
export function balanceFlows(
  network: Network,
  env: Float64Array,
  report: Report,
  say: Say,
  plan: FlowPlan = flowPlan(network),
): Flows | undefined {
  const solved = solveFlows(network, env, report, say, plan);
  if (!solved) return undefined;
  const { from, to } = plan;
  const streams = plan.streams.map(
    (stream, k): SolvedStream => ({ from: from[k], to: to[k], stream, flow: solved.flow[k] }),
  );
  const zoned = zoneFlows(network, streams, report, say);
  return zoned && { through: solved.through, streams, zoned };
}

/** Through-flow by place and flow by stream, m3/s; undefined, and reported, where they cannot be found. */
export function solveFlows(
  network: Network,
  env: Float64Array,
  report: Report,
  say: Say,
  plan: FlowPlan,
): { through: Float64Array; flow: Float64Array } | undefined {
  const { places, from } = plan;
  const supply = new Float64Array(places.length);
  const closed = isClosed(network);
  let good = splitsPossible(plan, closed, env, report, say);
  network.feeds.forEach((f, i) => {
    supply[i] = env[f.flowSlot];
    if (supply[i] > 0 && Number.isFinite(supply[i])) return;
    good = false;
    if (Number.isFinite(supply[i]))
      report("feed-zero", f.flow.at, { name: f.name, value: say(supply[i], dimensions.flow) });
    else {
      report("not-finite", f.flow.at, { what: `the flow of '${f.name}'`, infinite: !Number.isNaN(supply[i]) });
    }
  });
  if (!good) return undefined;
  const { share, fixed } = branchesOf(plan, env);
  const solved = solveThrough(plan, { share, fixed }, supply);
  if ("stuck" in solved) {
    const group = [...solved.stuck].sort((a, b) => a - b).map((i) => places[i]);
    report(closed ? "closed-flow-open" : "loop-unbounded", group[0].at, { names: group.map((p) => p.name) });
    return undefined;
  }
  const { through } = solved;
  if (closed && !fixedFlowsBalance(network, env, through, report, say)) return undefined;
  const flow = new Float64Array(from.length);
  for (let k = 0; k < flow.length; k++) {
    // A rest that is zero but for rounding is zero.
    const part = share[k] * through[from[k]];
    const q = part + fixed[k];
    flow[k] = Math.abs(q) <= 1e-12 * (Math.abs(part) + Math.abs(fixed[k])) ? 0 : q;
  }
  return flow.every((q) => q >= 0) || allPositive(plan, flow, through, report, say) ? { through, flow } : undefined;
}

/** Where a place of a closed vessel sends fixed flows alone, just that must arrive. */
function fixedFlowsBalance(
  network: Network,
  env: Float64Array,
  through: Float64Array,
  report: Report,
  say: Say,
): boolean {
  let good = true;
  network.compartments.forEach(({ name, streams, toAt }, i) => {
    const flows = streams.flatMap(({ split }) => (split.is === "flow" ? [split.value.of(env)] : []));
    if (flows.length === 0 || flows.length < streams.length) return;
    const sends = flows.reduce((sum, q) => sum + q, 0);
    const arrives = through[network.feeds.length + i];
    if (Math.abs(arrives - sends) <= 1e-9 * Math.max(Math.abs(arrives), sends)) return;
    good = false;
    const [said, sent] = [arrives, sends].map((q) => say(q, dimensions.flow));
    report("closed-unbalanced", toAt, { name, arrives: said, sends: sent });
  });
  return good;
}

interface Place {
  readonly name: string;
  readonly at: Span;
}

/** Shares and fixed flows are numbers, none below zero, and shares neither send more than there is nor leave some unsent. */
function splitsPossible({ dividing }: FlowPlan, closed: boolean, env: Float64Array, report: Report, say: Say): boolean {
  let good = true;
  const refuse: Report = (...problem) => {
    good = false;
    report(...problem);
  };
  for (const { node } of dividing) {
    const { name, streams, toAt } = node;
    let total = 0;
    for (const { split, to } of streams) {
      if (!("value" in split)) continue;
      const x = split.value.of(env);
      const { at } = split.value;
      if (split.is === "share") total += x;
      if (!Number.isFinite(x)) {
        refuse("not-finite", at, { what: `the ${split.is} from '${name}' to '${to}'`, infinite: !Number.isNaN(x) });
      } else if (x < 0 && split.is === "share") {
        refuse("share-range", at, { name, to, value: say(x, dimensions.ratio), recycle: undefined });
      } else if (x < 0) {
        const value = say(x, dimensions.flow);
        refuse("negative-flow", at, { name: `from '${name}' to '${to}'`, value, exchange: false });
      }
    }
    const open = streams.some(({ split }) => split.is === "rest" || split.is === "all") || streams.length === 0;
    // In a closed vessel fixed flows may be all; whether they balance shows when they are solved.
    if (closed && streams.every(({ split }) => split.is === "flow")) continue;
    if (good && (open ? total > 1 + 1e-9 : Math.abs(total - 1) > 1e-9)) {
      refuse("share-sum", toAt, { name, total: say(total, dimensions.ratio), rest: open });
    }
  }
  return good;
}

export function branchesOf({ streams, dividing }: FlowPlan, env: Float64Array): Branches {
  const share = new Float64Array(streams.length).fill(1);
  const fixed = new Float64Array(streams.length);
  for (const { node, first } of dividing) {
    let [shares, flows, rest] = [0, 0, -1];
    node.streams.forEach(({ split }, n) => {
      const k = first + n;
      if (split.is === "share") {
        share[k] = split.value.of(env);
        shares += share[k];
      } else if (split.is === "flow") {
        share[k] = 0;
        fixed[k] = split.value.of(env);
        flows += fixed[k];
      } else if (split.is === "rest") rest = k;
    });
    if (rest >= 0) {
      share[rest] = Math.abs(1 - shares) < 1e-15 ? 0 : 1 - shares;
      fixed[rest] = -flows;
    }
  }
  return { share, fixed };
}

/** No `rest` is below zero. Where less than nothing arrives, the fault lies upstream and is told there. */
function allPositive(
  { places, from, streams }: FlowPlan,
  flow: Float64Array,
  through: Float64Array,
  report: Report,
  say: Say,
): boolean {
  const all = Array.from(flow.keys());
  const negative = all.filter((k) => !(flow[k] >= 0));
  const first = negative.filter((k) => through[from[k]] >= 0);
  for (const k of first.length > 0 ? first : negative.slice(0, 1)) {
    const others = all.filter((o) => from[o] === from[k] && o !== k);
    const split = others.map((o) => streams[o].split).find(({ is }) => is === "flow");
    report("fixed-flow-too-large", split && "value" in split ? split.value.at : streams[k].at, {
      name: places[from[k]].name,
      fixed: say(
        others.reduce((sum, o) => sum + flow[o], 0),
        dimensions.flow,
      ),
      arrives: say(through[from[k]], dimensions.flow),
      several: others.length > 1,
    });
  }
  return negative.length === 0;
}
