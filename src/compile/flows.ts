import type { Network, Stream } from "../model/network.js";
import { stronglyConnected } from "../numerics/graph.js";
import { factor, solve } from "../numerics/lu.js";
import type { Report } from "../problems/report.js";
import type { Span } from "../text/source.js";
import { type Dimension, dimensions } from "../units/dimension.js";

/** Solved steady flows, m3/s. */
export interface Flows {
  /** Through-flow of every place, exchange left out: feeds, then compartments, then outlets, in file order. */
  readonly through: Float64Array;
  /** Streams in file order, feeds' first: indices of places, and the flow. */
  readonly streams: readonly SolvedStream[];
}

export interface SolvedStream {
  readonly from: number;
  readonly to: number;
  readonly flow: number;
  readonly stream: Stream;
}

/** One stream as a linear function of its source's through-flow: share * through + fixed. */
interface Branch {
  readonly from: number;
  readonly to: number;
  readonly share: number;
  readonly fixed: number;
  readonly stream: Stream;
}

/**
 * Steady flows of every stream. Groups of places are taken in flow order (Tarjan 1972): what is fed forward is plain
 * substitution, only circles need a small linear solve.
 * @returns undefined where a flow cannot be found; the reason is in `report`
 */
export function balanceFlows(network: Network, env: Float64Array, report: Report, say: Say): Flows | undefined {
  const places: Place[] = [...network.feeds, ...network.compartments, ...network.outlets];
  const index = new Map(places.map((p, i) => [p.name, i]));
  const branches = branchesOf(network, index, env);
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
  const solved = solveThrough(places.length, branches, supply);
  if ("stuck" in solved) {
    const group = [...solved.stuck].sort((a, b) => a - b).map((i) => places[i]);
    report("loop-unbounded", group[0].at, { names: group.map((p) => p.name) });
    return undefined;
  }
  const { through } = solved;
  const streams = branches.map((b) => {
    // A rest that is zero but for rounding is zero.
    const flow = b.share * through[b.from] + b.fixed;
    const small = 1e-12 * (Math.abs(b.share * through[b.from]) + Math.abs(b.fixed));
    return { from: b.from, to: b.to, stream: b.stream, flow: Math.abs(flow) <= small ? 0 : flow };
  });
  return allPositive(streams, through, places, report, say) ? { through, streams } : undefined;
}

/** A value as the file would write it, for messages. */
export type Say = (si: number, dimension: Dimension) => string;

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
    if (good && (open ? total > 1 + 1e-9 : Math.abs(total - 1) > 1e-9)) {
      refuse("share-sum", toAt, { name, total: say(total, dimensions.ratio), rest: open });
    }
  }
  return good;
}

function branchesOf(network: Network, index: ReadonlyMap<string, number>, env: Float64Array): Branch[] {
  return [...network.feeds, ...network.compartments].flatMap((node, from) => {
    let shares = 0;
    let fixed = 0;
    for (const { split } of node.streams) {
      if (split.is === "share") shares += split.value.of(env);
      else if (split.is === "flow") fixed += split.value.of(env);
    }
    const rest = 1 - shares;
    return node.streams.map((stream): Branch => {
      const to = index.get(stream.to) as number;
      const { split } = stream;
      if (split.is === "share") return { from, to, stream, share: split.value.of(env), fixed: 0 };
      if (split.is === "flow") return { from, to, stream, share: 0, fixed: split.value.of(env) };
      if (split.is === "all") return { from, to, stream, share: 1, fixed: 0 };
      return { from, to, stream, share: Math.abs(rest) < 1e-15 ? 0 : rest, fixed: -fixed };
    });
  });
}

/** Through-flows, or the places of a circle whose flow cannot be told. */
function solveThrough(
  size: number,
  branches: readonly Branch[],
  supply: Float64Array,
): { through: Float64Array } | { stuck: Int32Array } {
  const graph = { size, from: branches.map((b) => b.from), to: branches.map((b) => b.to) };
  const into: Branch[][] = Array.from({ length: size }, () => []);
  for (const b of branches) into[b.to].push(b);
  const through = new Float64Array(size);
  for (const group of stronglyConnected(graph)) {
    const local = new Map([...group].map((node, i) => [node, i]));
    const n = group.length;
    const matrix = new Float64Array(n * n);
    const rhs = new Float64Array(n);
    group.forEach((node, i) => {
      matrix[i * n + i] += 1;
      rhs[i] = supply[node];
      for (const b of into[node]) {
        const j = local.get(b.from);
        if (j === undefined) rhs[i] += b.share * through[b.from] + b.fixed;
        else {
          matrix[i * n + j] -= b.share;
          rhs[i] += b.fixed;
        }
      }
    });
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
