import type { ZoneTable } from "../compartments/zone-table.js";
import { isClosed, type Network, type Stream } from "../model/network.js";
import { type Adjacency, adjacency, stronglyConnected } from "../numerics/graph.js";
import { factor, solve } from "../numerics/lu.js";
import type { Report } from "../problems/report.js";
import type { Span } from "../text/source.js";
import { dimensions } from "../units/dimension.js";
import type { Say } from "./say.js";
import type { SolvedStream } from "./solved-stream.js";
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
}

export function flowPlan(network: Network): FlowPlan {
  const places: Place[] = [...network.feeds, ...network.compartments, ...network.outlets];
  const index = new Map(places.map((p, i) => [p.name, i]));
  const nodes = [...network.feeds, ...network.compartments];
  const streams = nodes.flatMap((n) => n.streams);
  const from = Int32Array.from(nodes.flatMap((n, i) => n.streams.map(() => i)));
  const to = Int32Array.from(streams, (s) => index.get(s.to) as number);
  const size = places.length;
  return { places, streams, from, to, groups: stronglyConnected({ size, from, to }), into: adjacency(size, to) };
}

/** Every stream as a linear function of its source's through-flow: share * through + fixed. */
export interface Branches {
  readonly share: Float64Array;
  readonly fixed: Float64Array;
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
  const { places, from, to } = plan;
  const supply = new Float64Array(places.length);
  let good = splitsPossible(network, env, report, say);
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
  const { share, fixed } = branchesOf(network, plan, env);
  const solved = solveThrough(plan, { share, fixed }, supply);
  if ("stuck" in solved) {
    const group = [...solved.stuck].sort((a, b) => a - b).map((i) => places[i]);
    const names = group.map((p) => p.name);
    report(isClosed(network) ? "closed-flow-open" : "loop-unbounded", group[0].at, { names });
    return undefined;
  }
  const { through } = solved;
  if (!fixedFlowsBalance(network, env, through, report, say)) return undefined;
  const streams = plan.streams.map((stream, k): SolvedStream => {
    // A rest that is zero but for rounding is zero.
    const part = share[k] * through[from[k]];
    const flow = part + fixed[k];
    const small = 1e-12 * (Math.abs(part) + Math.abs(fixed[k]));
    return { from: from[k], to: to[k], stream, flow: Math.abs(flow) <= small ? 0 : flow };
  });
  if (!allPositive(streams, through, places, report, say)) return undefined;
  const zoned = zoneFlows(network, streams, report, say);
  return zoned && { through, streams, zoned };
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
function splitsPossible(network: Network, env: Float64Array, report: Report, say: Say): boolean {
  let good = true;
  const refuse: Report = (...problem) => {
    good = false;
    report(...problem);
  };
  for (const { name, streams, toAt } of [...network.feeds, ...network.compartments]) {
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
    if (isClosed(network) && streams.every(({ split }) => split.is === "flow")) continue;
    if (good && (open ? total > 1 + 1e-9 : Math.abs(total - 1) > 1e-9)) {
      refuse("share-sum", toAt, { name, total: say(total, dimensions.ratio), rest: open });
    }
  }
  return good;
}

export function branchesOf(network: Network, plan: FlowPlan, env: Float64Array): Branches {
  const share = new Float64Array(plan.streams.length);
  const fixed = new Float64Array(plan.streams.length);
  let first = 0;
  for (const { streams } of [...network.feeds, ...network.compartments]) {
    let [shares, flows, rest] = [0, 0, -1];
    streams.forEach(({ split }, n) => {
      const k = first + n;
      if (split.is === "share") {
        share[k] = split.value.of(env);
        shares += share[k];
      } else if (split.is === "flow") {
        fixed[k] = split.value.of(env);
        flows += fixed[k];
      } else if (split.is === "all") share[k] = 1;
      else rest = k;
    });
    if (rest >= 0) {
      share[rest] = Math.abs(1 - shares) < 1e-15 ? 0 : 1 - shares;
      fixed[rest] = -flows;
    }
    first += streams.length;
  }
  return { share, fixed };
}

/** Through-flows for what is supplied to each place, or the places of a circle whose flow cannot be told. */
export function solveThrough(
  { places, from, groups, into }: FlowPlan,
  { share, fixed }: Branches,
  supply: Float64Array,
): { through: Float64Array } | { stuck: Int32Array } {
  const through = new Float64Array(places.length);
  const local = new Int32Array(places.length).fill(-1);
  for (const group of groups) {
    const n = group.length;
    const matrix = new Float64Array(n * n);
    const rhs = new Float64Array(n);
    for (let i = 0; i < n; i++) local[group[i]] = i;
    for (let i = 0; i < n; i++) {
      const node = group[i];
      matrix[i * n + i] += 1;
      rhs[i] = supply[node];
      for (let e = into.start[node]; e < into.start[node + 1]; e++) {
        const k = into.edges[e];
        const j = local[from[k]];
        if (j < 0) rhs[i] += share[k] * through[from[k]];
        else matrix[i * n + j] -= share[k];
        rhs[i] += fixed[k];
      }
    }
    for (let i = 0; i < n; i++) local[group[i]] = -1;
    if (n > 1 || matrix[0] !== 1) {
      const lu = factor(matrix, n);
      if (lu === "singular") return { stuck: group };
      solve(lu, rhs);
      if (!rhs.every(Number.isFinite)) return { stuck: group };
    }
    group.forEach((node, i) => {
      through[node] = rhs[i];
    });
  }
  return { through };
}

/** No `rest` is below zero. Where less than nothing arrives, the fault lies upstream and is told there. */
function allPositive(
  streams: readonly SolvedStream[],
  through: Float64Array,
  places: readonly Place[],
  report: Report,
  say: Say,
): boolean {
  const negative = streams.filter((s) => !(s.flow >= 0));
  const first = negative.filter((s) => through[s.from] >= 0);
  for (const { from, stream } of first.length > 0 ? first : negative.slice(0, 1)) {
    const others = streams.filter((o) => o.from === from && o.stream !== stream);
    const split = others.find((o) => o.stream.split.is === "flow")?.stream.split;
    report("fixed-flow-too-large", split && "value" in split ? split.value.at : stream.at, {
      name: places[from].name,
      fixed: say(
        others.reduce((sum, o) => sum + o.flow, 0),
        dimensions.flow,
      ),
      arrives: say(through[from], dimensions.flow),
      several: others.length > 1,
    });
  }
  return negative.length === 0;
}
