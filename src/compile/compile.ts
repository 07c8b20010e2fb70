import { memberOf } from "../model/members.js";
import { followedIn, isClosed, type Network } from "../model/network.js";
import type { Value } from "../model/value.js";
import { backEdges } from "../numerics/graph.js";
import type { Problem } from "../problems/problem.js";
import { collector } from "../problems/report.js";
import { formatQuantity } from "../units/format.js";
import { affectedBy } from "./affected.js";
import { evaluateNames } from "./evaluate.js";
import { balanceFlows, type FlowPlan, type Flows, flowPlan, solveFlows } from "./flows.js";
import type { Plant, PlantStream, Settings } from "./plant.js";
import { valuesInRange, volumesOf } from "./ranges.js";
import type { Say } from "./say.js";
import { carriedFlows, sendsPossible } from "./sends.js";
import { sendsTrapped } from "./sends-trapped.js";
import { spellOut } from "./spell.js";
import { Structure } from "./structure.js";

/**
 * Balances a network and spells it out in primitive nodes.
 * @param settings values to use in place of the file's, SI, by name (`bypass`, `feed.flow`)
 * @returns no plant, and the reasons as problems, where values make a volume or flow impossible; never throws
 */
export function compile(network: Network, settings: Settings = {}): { plant: Plant | undefined; problems: Problem[] } {
  return compileWith(network, settings, undefined, undefined);
}

function compileWith(
  network: Network,
  settings: Settings,
  plan: FlowPlan | undefined,
  known: Structure | undefined,
): { plant: Plant | undefined; problems: Problem[] } {
  const { env, volumes, flows, problems } = balance(network, settings, plan);
  if (!flows || problems.length > 0) return { plant: undefined, problems };
  return { plant: plantOf(network, settings, env, volumes, flows, known), problems };
}

/** `compile` for many settings of one network: what does not depend on values is found once. */
export function compiler(network: Network): {
  compile: (settings: Settings) => ReturnType<typeof compile>;
  plan: FlowPlan;
} {
  const plan = flowPlan(network);
  let known: Structure | undefined;
  return {
    plan,
    compile: (settings) => {
      const compiled = compileWith(network, settings, plan, known);
      known = compiled.plant?.structure ?? known;
      return compiled;
    },
  };
}

/**
 * Tells of many settings what makes a network impossible there that is possible at its own values; nothing where `compile`
 * would give a plant. Only what the settings touch is looked at.
 */
export function problemFinder(network: Network): (settings: Settings) => Problem[] {
  const plan = flowPlan(network);
  const affected = affectedBy(network);
  const zoned = network.compartments.some((c) => c.zones);
  const say = sayer(network);
  return (settings) => {
    const { compartments, flows } = affected(Object.keys(settings));
    const { report, problems } = collector();
    const env = evaluateNames(network, settings);
    const touched = { ...network, compartments };
    volumesOf(touched, env, report, say);
    if (flows) (zoned ? balanceFlows : solveFlows)(network, env, report, say, plan);
    valuesInRange(touched, env, report, say);
    return problems;
  };
}

/**
 * What makes a network impossible that is no network yet, since something else in it is wrong: as far as it does not hang on
 * that. What cannot be computed is not told.
 * @param flows can they be found?
 */
export function impossible(network: Network, flows: boolean): Problem[] {
  const env = evaluateNames(network);
  const bounded = withoutExplained(network, env);
  const { report, problems } = collector();
  const say = sayer(network);
  volumesOf(bounded, env, report, say);
  const found = flows ? balanceFlows(network, env, report, say) : undefined;
  valuesInRange(bounded, env, report, say);
  sendsPossible(network, env, found?.streams, report, say);
  if (found && problems.length === 0) sendsTrapped(network, env, found.streams, report);
  return problems.filter((p) => p.code !== "not-finite");
}

/** Without values that share a name with a requirement that does not hold: that says it better. */
function withoutExplained(network: Network, env: ArrayLike<number>): Network {
  const broken = network.requires.filter((r) => !(r.slack(env) > 0));
  if (broken.length === 0) return network;
  const names = new Set(broken.flatMap((r) => [...r.left.uses, ...r.right.uses]));
  const open = (v: Value): boolean => !v.uses.some((name) => names.has(name));
  return {
    ...network,
    compartments: network.compartments.map((c) => ({
      ...c,
      values: Object.fromEntries(
        Object.entries(c.values).map(([key, v]) => [key, open(v) ? v : { ...v, of: () => Number.NaN }]),
      ),
      exchanges: c.exchanges.filter((e) => open(e.flow)),
    })),
  };
}

const sayer =
  ({ units }: Network): Say =>
  (si, dimension) =>
    formatQuantity(si, units.unitFor(dimension), 6);

function balance(network: Network, settings: Settings, plan?: FlowPlan) {
  const { report, problems } = collector();
  const env = evaluateNames(network, settings);
  const say = sayer(network);
  const volumes = volumesOf(network, env, report, say);
  const flows = balanceFlows(network, env, report, say, plan);
  valuesInRange(network, env, report, say);
  sendsPossible(network, env, flows?.streams, report, say);
  if (flows && problems.length === 0) sendsTrapped(network, env, flows.streams, report);
  return { env, volumes, flows, problems };
}

function plantOf(
  network: Network,
  settings: Settings,
  env: Float64Array,
  volumes: Float64Array,
  flows: Flows,
  known: Structure | undefined,
): Plant {
  const spelled = spellOut(network, env, flows);
  const { nodes, from, to, flow } = spelled;
  const inflow = new Float64Array(nodes.size);
  for (let k = 0; k < flow.length; k++) inflow[to[k]] += flow[k];
  network.feeds.forEach((_, i) => {
    inflow[i] += flows.through[i];
  });
  const total = volumes.reduce((sum, v) => sum + v, 0);
  // What lies still in a closed vessel is no dead volume: a flask is all there is.
  const closed = isClosed(network);
  let active = 0;
  for (let i = 0; i < nodes.size; i++) if (closed || inflow[i] > 0) active += nodes.volume[i];
  let made: Plant["nodes"] | undefined;
  const part = nodes.part.subarray(0, nodes.size);
  const structure = known?.orNew(part, from, to) ?? new Structure(part, from, to);
  let streams: PlantStream[] | undefined;
  const offset = network.feeds.length + network.compartments.length;
  return {
    network,
    settings,
    env,
    get nodes() {
      made ??= nodes.nodes(inflow);
      return made;
    },
    columns: {
      size: nodes.size,
      part,
      volume: nodes.volume.subarray(0, nodes.size),
      inflow,
      nameOf: (i) => nodes.nameOf(i),
      blockAt: (i) => nodes.blockAt(i),
    },
    from,
    to,
    flow,
    ...(followedIn(network).length > 0
      ? { carried: carriedFlows(network, env, flows.streams, flow, spelled.firstStream) }
      : {}),
    feeds: network.feeds.map((f, i) => ({ name: f.name, node: i, flow: flows.through[i] })),
    outlets: network.outlets.map((o, i) => ({
      name: o.name,
      node: spelled.entry.get(o.name) as number,
      flow: flows.through[offset + i],
    })),
    entry: spelled.entry,
    exit: spelled.exit,
    structure,
    get groups() {
      return structure.groups;
    },
    get streams() {
      streams ??= streamsOf(network, env, flows);
      return streams;
    },
    // Rounding is no dead volume.
    volume: { total, active, dead: total - active > 1e-12 * total ? total - active : 0 },
  };
}

function streamsOf(network: Network, env: Float64Array, flows: Flows): PlantStream[] {
  const names = [...network.feeds, ...network.compartments, ...network.outlets].map((p) => p.name);
  const edges = { size: names.length, from: flows.streams.map((s) => s.from), to: flows.streams.map((s) => s.to) };
  const back = backEdges(edges, isClosed(network) ? [0] : network.feeds.keys());
  const zones = new Map(network.compartments.flatMap((c) => (c.zones ? [[c.name, c.zones] as const] : [])));
  // The only port of a body needs no name.
  const port = (name: string, suffix: string | undefined, side: "inlets" | "outlets"): string =>
    suffix === undefined || zones.get(name)?.[side].length === 1 ? name : `${name}.${suffix}`;
  const streams = flows.streams.map((s, k): PlantStream => {
    const { split } = s.stream;
    const written =
      "value" in split ? split.value.at.source.text.slice(split.value.at.from, split.value.at.to) : split.is;
    const [from, to] = [names[s.from], names[s.to]];
    const leaves = port(from, s.stream.leaves, "outlets");
    const enters = port(to, s.stream.enters, "inlets");
    const role = back[k] ? "recycle" : "forward";
    const share = split.is === "share" ? { share: split.value.of(env) } : {};
    return { from, to, leaves, enters, flow: s.flow, role, written, ...share };
  });
  const exchanges = network.compartments.flatMap((c) =>
    c.exchanges.map((e): PlantStream => {
      const written = e.flow.at.source.text.slice(e.flow.at.from, e.flow.at.to);
      const to = memberOf(network.compartments, e.partner)?.name ?? e.partner;
      const flow = e.flow.of(env);
      return { from: c.name, to, leaves: c.name, enters: e.partner, flow, role: "exchange", written };
    }),
  );
  return [...streams, ...exchanges];
}
