import type { Compartment, Feed, Group, Named, Stream } from "../model/network.js";
import type { Env, Value } from "../model/value.js";
import { stronglyConnected } from "../numerics/graph.js";
import { factor, solve } from "../numerics/lu.js";
import type { Report } from "../problems/report.js";
import { type Basis, inBasis } from "../units/basis.js";
import { dimensions } from "../units/dimension.js";
import type { Declared } from "./declare.js";
import { dependencyOrder } from "./dependency-order.js";

interface Places {
  readonly feeds: readonly Feed[];
  readonly compartments: readonly Compartment[];
  readonly groups: readonly Group[];
}

/** Flows into parts as values, and the order in which all values of a network can be found. */
export interface Inflows {
  readonly names: readonly Named[];
  readonly order: readonly number[];
}

/**
 * The flow that arrives at a feed of a part, as a value of what the streams on its way are made of: so that values that
 * follow it are known before all flows are.
 * @param wanted those that some value uses
 * @param needs  by slot, what the other values need
 */
export function inflowsOf(
  wanted: readonly Declared[],
  places: Places,
  slots: ReadonlyMap<string, number>,
  needs: readonly (readonly number[])[],
  basis: Basis,
  report: Report,
): Inflows {
  if (wanted.length === 0) return { names: [], order: dependencyOrder(needs).order };
  const ways = waysOf(places);
  const all = needs.map((n) => [...n]);
  const names = wanted.map((d): Named => {
    const inlet = ways.inlets.get(d.name.replace(/\.flow$/, "")) ?? "";
    const { uses, of } = arrivingAt(inlet, ways);
    const slot = slots.get(d.name) as number;
    all[slot] = uses.flatMap((name) => slots.get(name) ?? []);
    return { name: d.name, slot, role: "inflow", at: d.at, value: flowValue(d, uses, of, basis), ...unbounded };
  });
  const { order, circles } = dependencyOrder(all);
  const nameOf = new Map([...slots].map(([name, slot]) => [slot, name]));
  for (const circle of circles) {
    const inflow = names.find((n) => circle.includes(n.slot));
    if (!inflow) continue; // told before
    const turn = circle.indexOf(inflow.slot);
    const round = [...circle.slice(turn, -1), ...circle.slice(0, turn), inflow.slot].map((s) => nameOf.get(s) ?? "");
    report("circular-flow", inflow.at, { inlet: inflow.name.replace(/\.flow$/, ""), circle: round });
  }
  return { names, order };
}

const unbounded = { between: undefined, spacing: "linear", about: undefined } as const;

const flowValue = ({ at, name }: Declared, uses: readonly string[], of: (env: Env) => number, basis: Basis): Value => ({
  at,
  dimension: inBasis(dimensions.flow, basis),
  unit: undefined,
  expression: { type: "name", name, at: { from: 0, to: name.length } },
  uses,
  of,
  sd: undefined,
});

/** Streams by where they end. */
interface Ways {
  readonly into: ReadonlyMap<string, readonly Way[]>;
  readonly feeds: ReadonlyMap<string, Feed>;
  /** From the one outlet of a part to its one inlet: what enters leaves, whatever happens inside. */
  readonly through: ReadonlyMap<string, string>;
  /** By its name among values, where an inlet is: that of the first, where parts are repeated. */
  readonly inlets: ReadonlyMap<string, string>;
}

interface Way {
  readonly from: string;
  readonly stream: Stream;
  /** All streams out of `from`. */
  readonly siblings: readonly Stream[];
}

function waysOf({ feeds, compartments, groups }: Places): Ways {
  const into = new Map<string, Way[]>();
  for (const { name, streams } of [...feeds, ...compartments]) {
    for (const stream of streams) {
      const way = { from: name, stream, siblings: streams };
      const known = into.get(stream.to);
      if (known) known.push(way);
      else into.set(stream.to, [way]);
    }
  }
  const through = new Map<string, string>();
  const inlets = new Map<string, string>();
  for (const g of groups) {
    if (g.inlets.length === 1 && g.outlets.length === 1) through.set(g.outlets[0], g.inlets[0]);
    // Values that are the same in all repeats have no number in their names.
    for (const inlet of g.inlets) {
      for (const name of withoutNumbers(inlet)) if (!inlets.has(name)) inlets.set(name, inlet);
    }
  }
  return { into, feeds: new Map(feeds.map((f) => [f.name, f])), through, inlets };
}

/** A name, and what it is without some or all of the numbers of repeats in it. */
function withoutNumbers(name: string): string[] {
  const [first, ...rest] = name.split(".");
  let heads = [first];
  for (const piece of rest) {
    const longer = heads.map((head) => `${head}.${piece}`);
    heads = /^\d+$/.test(piece) ? longer.concat(heads) : longer;
  }
  return heads;
}

/** Through-flow of one place: a small linear system over all that lies on the way to it, in flow order (Tarjan 1972). */
function arrivingAt(inlet: string, ways: Ways): { uses: string[]; of: (env: Env) => number } {
  const places = [inlet];
  const index = new Map([[inlet, 0]]);
  const links: { from: number; to: number; way: Way | undefined }[] = [];
  const uses = new Set<string>();
  const link = (name: string, to: number, way: Way | undefined): void => {
    if (!index.has(name)) index.set(name, places.push(name) - 1);
    links.push({ from: index.get(name) as number, to, way });
  };
  for (let to = 0; to < places.length; to++) {
    const around = ways.through.get(places[to]);
    if (around !== undefined) link(around, to, undefined);
    else {
      for (const way of ways.into.get(places[to]) ?? []) {
        link(way.from, to, way);
        for (const name of usesOf(way)) uses.add(name);
      }
    }
    if (ways.feeds.has(places[to])) uses.add(`${places[to]}.flow`);
  }
  const supplies = places.map((name) => ways.feeds.get(name)?.flowSlot);
  const into = places.map((_, to) => links.filter((l) => l.to === to));
  const groups = stronglyConnected({ size: places.length, from: links.map((l) => l.from), to: links.map((l) => l.to) });
  const of = (env: Env): number => {
    const flow = new Float64Array(places.length);
    for (const group of groups) {
      const n = group.length;
      const row = new Map([...group].map((place, i) => [place, i]));
      const matrix = new Float64Array(n * n);
      const rhs = new Float64Array(n);
      group.forEach((place, i) => {
        const slot = supplies[place];
        matrix[i * n + i] += 1;
        rhs[i] += slot === undefined ? 0 : env[slot];
        for (const { from, way } of into[place]) {
          const { share, fixed } = way ? branch(way, env) : { share: 1, fixed: 0 };
          const j = row.get(from);
          rhs[i] += fixed + (j === undefined ? share * flow[from] : 0);
          if (j !== undefined) matrix[i * n + j] -= share;
        }
      });
      if (n > 1 || matrix[0] !== 1) {
        const lu = factor(matrix, n);
        if (lu === "singular") return Number.NaN; // the balance of the whole network tells
        solve(lu, rhs);
      }
      group.forEach((place, i) => {
        flow[place] = rhs[i];
      });
    }
    return flow[0];
  };
  return { uses: [...uses], of };
}

function usesOf({ stream, siblings }: Way): readonly string[] {
  if (stream.split.is === "all") return [];
  if ("value" in stream.split) return stream.split.value.uses;
  return siblings.flatMap(({ split }) => ("value" in split ? split.value.uses : []));
}

/** A stream as a linear function of the through-flow of its source: share * through + fixed. */
function branch({ stream: { split }, siblings }: Way, env: Env): { share: number; fixed: number } {
  if (split.is === "all") return { share: 1, fixed: 0 };
  if (split.is === "share") return { share: split.value.of(env), fixed: 0 };
  if (split.is === "flow") return { share: 0, fixed: split.value.of(env) };
  let share = 1;
  let fixed = 0;
  for (const s of siblings) {
    if (s.split.is === "share") share -= s.split.value.of(env);
    else if (s.split.is === "flow") fixed -= s.split.value.of(env);
  }
  return { share, fixed };
}
