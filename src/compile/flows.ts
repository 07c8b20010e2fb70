import type { Network, Stream } from "../model/network.js";
import { stronglyConnected } from "../numerics/graph.js";
import { factor, solve } from "../numerics/lu.js";
import type { Report } from "../problems/report.js";
import type { Span } from "../text/source.js";

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
 * @param say a flow as the file would write it, for messages
 * @returns undefined where a flow cannot be found; the reason is in `report`
 */
export function balanceFlows(
  network: Network,
  env: Float64Array,
  report: Report,
  say: (flow: number) => string,
): Flows | undefined {
  const places = [...network.feeds, ...network.compartments, ...network.outlets];
  const index = new Map(places.map((p, i) => [p.name, i]));
  const branches = branchesOf(network, index, env);
  const supply = new Float64Array(places.length);
  let good = true;
  network.feeds.forEach((f, i) => {
    supply[i] = env[f.flowSlot];
    if (!(supply[i] > 0)) {
      good = false;
      report("feed-zero", f.flow.at, { name: f.name, value: say(supply[i]) });
    }
  });
  if (!good) return undefined;
  const through = solveThrough(places.length, branches, supply);
  if (typeof through === "number") {
    report("closed-loop", places[through].at, { names: [places[through].name] });
    return undefined;
  }
  const streams = branches.map((b) => {
    // A rest that is zero but for rounding is zero.
    const flow = b.share * through[b.from] + b.fixed;
    const small = 1e-12 * (Math.abs(b.share * through[b.from]) + Math.abs(b.fixed));
    return { from: b.from, to: b.to, stream: b.stream, flow: Math.abs(flow) <= small ? 0 : flow };
  });
  return allPositive(streams, through, places, report, say) ? { through, streams } : undefined;
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

/** Through-flows, or the index of a place in a circle whose flow cannot be told. */
function solveThrough(size: number, branches: readonly Branch[], supply: Float64Array): Float64Array | number {
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
      if (lu === "singular") return group[0];
      solve(lu, rhs);
    }
    group.forEach((node, i) => {
      if (Number.isFinite(rhs[i])) through[node] = rhs[i];
    });
  }
  return through;
}

function allPositive(
  streams: readonly SolvedStream[],
  through: Float64Array,
  places: readonly { readonly name: string; readonly at: Span }[],
  report: Report,
  say: (flow: number) => string,
): boolean {
  let good = true;
  for (const s of streams) {
    if (s.flow >= 0) continue;
    good = false;
    const name = places[s.from].name;
    const { split } = s.stream;
    if (split.is === "rest") {
      const fixed = streams.filter((o) => o.from === s.from && o !== s).reduce((sum, o) => sum + o.flow, 0);
      report("fixed-flow-too-large", s.stream.at, { name, fixed: say(fixed), arrives: say(through[s.from]) });
    } else report("negative-flow", s.stream.at, { name: `from '${name}' to '${s.stream.to}'`, value: say(s.flow) });
  }
  return good;
}
