import { Part, type Plant, type PlantNode } from "../compile/plant.js";
import { type Link, linksOf, type Where, whereOf } from "./links.js";
import { concentration, held, keyOf, spaceTime, texName, texQuantity, throughFlow, volume } from "./tex.js";

/** One term of a balance, with its sign and its place in the file. */
export interface Term extends Where {
  readonly tex: string;
  readonly says: string;
}

/** The equation of one node, at the place of its compartment or outlet: a state that changes in time, a delay, a meeting of streams, or a body with a curve of its own. */
export interface Balance extends Where {
  readonly name: string;
  readonly is: "state" | "delay" | "joint" | "body";
  /** What stands left of the equals sign, and all of it. */
  readonly left: string;
  readonly tex: string;
  readonly terms: readonly Term[];
  /** Of a body with a curve of its own: its transfer function, and what it holds. */
  readonly also?: readonly string[];
}

/**
 * The compiled balances of a plant for one tracer or species without reaction: one per primitive node but the feeds,
 * whose concentrations are given, and what no flow reaches.
 */
export function balancesOf(plant: Plant): Balance[] {
  const links = linksOf(plant).filter((l) => l.flow > 0);
  const [arriving, leaving] = [grouped(links, (l) => l.to), grouped(links, (l) => l.from)];
  const feeds = new Set(plant.feeds.map((f) => f.node));
  return plant.nodes.flatMap((node, i): Balance[] => {
    if (feeds.has(i) || !(node.inflow > 0)) return [];
    const write = writers[node.part] ?? body;
    return [
      write({
        plant,
        node,
        where: placeAt(plant, node.name),
        into: arriving.get(i) ?? [],
        outOf: leaving.get(i) ?? [],
      }),
    ];
  });
}

/** A node with the links that end and begin at it. */
interface Surrounded {
  readonly plant: Plant;
  readonly node: PlantNode;
  readonly where: Where;
  readonly into: readonly Link[];
  readonly outOf: readonly Link[];
}

const writers: Readonly<Record<number, (at: Surrounded) => Balance>> = {
  [Part.Cell]: state,
  [Part.Delay]: delay,
  [Part.Joint]: joint,
};

/** V dc/dt = what comes in - what goes out. */
function state({ plant, node: { name }, where, into, outOf }: Surrounded): Balance {
  const left = `${volume(name)} \\frac{d${concentration(name)}}{dt}`;
  const terms = [...into.map((l) => term("+", l, plant)), ...outOf.map((l) => term("-", l, plant))];
  return { name, is: "state", left, tex: `${left} = ${sumOf(terms)}`, terms, ...where };
}

/** What leaves a tube is what entered it one space time ago. */
function delay({ plant, node: { name, volume: held, inflow }, where, into }: Surrounded): Balance {
  const tau = spaceTime(name);
  const left = `${concentration(name)}(t)`;
  const late = mixture(into, plant, (c) => `${c}\\!\\left(t - ${tau}\\right)`);
  const value = texQuantity(held / inflow, plant.network.units.time);
  const tex = `${left} = ${late},\\qquad ${tau} = ${volume(name)} / ${throughFlow(name)} = ${value}`;
  return { name, is: "delay", left, tex, terms: into.map((l) => term("+", l, plant)), ...where };
}

function joint({ plant, node: { name }, where, into }: Surrounded): Balance {
  const left = concentration(name);
  const tex = `${left} = ${mixture(into, plant, (c) => c)}`;
  return { name, is: "joint", left, tex, terms: into.map((l) => term("+", l, plant)), ...where };
}

/** A body that is known by its transfer function, in Laplace space. */
function body({ plant, node: { name, block }, where, into }: Surrounded): Balance {
  const hat = (c: string): string => `\\hat ${c}(s)`;
  const left = hat(concentration(name));
  const transfer = `G_{${texName(name)}}(s)`;
  const flow = throughFlow(name);
  const entering = mixture(into, plant, hat);
  const tex = `${left} = ${transfer}\\; ${entering}`;
  const key = (k: string): string => (k === "volume" ? volume(name) : keyOf(k, name));
  const also = [
    ...(block ? [block.equation({ transfer, flow, key })] : []),
    `\\hat ${held(name)}(s) = \\frac{${flow}}{s}\\left(1 - ${transfer}\\right) ${entering}`,
  ];
  return { name, is: "body", left, tex, terms: into.map((l) => term("+", l, plant)), also, ...where };
}

/** The flow-weighted mean of what enters; of one stream what that brings. */
function mixture(into: readonly Link[], { nodes }: Plant, form: (c: string) => string): string {
  const brought = (l: Link): string => form(concentration(nodes[l.from].name));
  if (into.length === 1) return brought(into[0]);
  const sum = into.map((l) => `${l.symbol}\\, ${brought(l)}`).join(" + ");
  return `\\frac{${sum}}{${into.map((l) => l.symbol).join(" + ")}}`;
}

const term = (sign: "+" | "-", { symbol, from, says, file, line }: Link, { nodes }: Plant): Term => ({
  tex: `${sign} ${symbol}\\, ${concentration(nodes[from].name)}`,
  says: `${sign === "+" ? "in" : "out"}: ${says}`,
  file,
  line,
});

const sumOf = (terms: readonly Term[]): string =>
  terms
    .map((t) => t.tex)
    .join(" ")
    .replace(/^\+ /, "");

function grouped(links: readonly Link[], by: (link: Link) => number): Map<number, Link[]> {
  const groups = new Map<number, Link[]>();
  for (const link of links) {
    const group = groups.get(by(link));
    if (group) group.push(link);
    else groups.set(by(link), [link]);
  }
  return groups;
}

function placeAt({ network }: Plant, node: string): Where {
  const places = [...network.feeds, ...network.compartments, ...network.outlets];
  const place = places.find((p) => node === p.name) ?? places.find((p) => node.startsWith(`${p.name}.`));
  return whereOf((place ?? network).at);
}
