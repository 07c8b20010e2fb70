import { columnsOf } from "../../src/compile/node-list.js";
import { Part, type Plant } from "../../src/compile/plant.js";
import { Structure } from "../../src/compile/structure.js";
import type { Chemistry, Reaction } from "../../src/model/chemistry.js";
import type { Duty } from "../../src/model/duty.js";
import type { Network } from "../../src/model/network.js";
import type { Value } from "../../src/model/value.js";
import { stronglyConnected } from "../../src/numerics/graph.js";
import type { Span } from "../../src/text/source.js";
import { type Dimension, dimensions } from "../../src/units/dimension.js";

const at: Span = { source: { path: "made by hand", text: "" }, from: 0, to: 0 };
const molar = dimensions["molar concentration"];

/** A bare number as a value. */
export function value(number: number, dimension: Dimension = molar, sd?: number): Value {
  const unit = { name: "1", factor: 1, offset: 0, dimension };
  return {
    at,
    dimension,
    unit,
    expression: { type: "number", value: number, unit, at: { from: 0, to: 0 } },
    uses: [],
    of: () => number,
    sd: sd === undefined ? undefined : () => sd,
  };
}

/** cells and tubes by volume; every other name in a link is a joint; feeds are `feed`, `feed2`; outlets start with `out`. */
export interface Sketch {
  readonly cells?: Readonly<Record<string, number>>;
  readonly tubes?: Readonly<Record<string, number>>;
  readonly links: readonly (readonly [from: string, to: string, flow: number])[];
}

/** A plant from a sketch. Flows must balance: it is not checked. */
export function plantOf({ cells = {}, tubes = {}, links }: Sketch): Plant {
  const linked = links.flatMap((link) => link.slice(0, 2) as string[]);
  const names = [...new Set([...linked, ...Object.keys(cells), ...Object.keys(tubes)])];
  const index = new Map(names.map((name, i) => [name, i]));
  const node = (name: string): number => index.get(name) as number;
  const from = Int32Array.from(links, ([a]) => node(a));
  const to = Int32Array.from(links, ([, b]) => node(b));
  const flow = Float64Array.from(links, ([, , q]) => q);
  const sum = (ends: Int32Array, i: number): number => flow.reduce((s, q, k) => (ends[k] === i ? s + q : s), 0);
  const isFeed = (name: string): boolean => name.startsWith("feed");
  const nodes = names.map((name, i) => ({
    name,
    part: name in cells ? Part.Cell : name in tubes ? Part.Delay : Part.Joint,
    volume: cells[name] ?? tubes[name] ?? 0,
    inflow: isFeed(name) ? sum(from, i) : sum(to, i),
  }));
  const port = (name: string) => ({ name, node: node(name), flow: nodes[node(name)].inflow });
  return {
    network: { title: "made by hand" } as unknown as Network,
    env: new Float64Array(),
    nodes,
    columns: columnsOf(nodes),
    structure: new Structure(columnsOf(nodes).part, from, to),
    from,
    to,
    flow,
    feeds: names.filter(isFeed).map(port),
    outlets: names.filter((n) => n.startsWith("out")).map(port),
    entry: index,
    exit: index,
    groups: stronglyConnected({ size: names.length, from, to }),
    streams: [],
    volume: { total: 0, active: 0, dead: 0 },
  };
}

/** A law over an Env of concentrations then constants, with its own derivatives. */
export type Law = Pick<Reaction, "rate" | "gradient"> & { readonly makes: readonly number[] };

/** k[slot] times powers of species. */
export const power = (constant: number, orders: readonly number[], makes: readonly number[]): Law => ({
  makes,
  rate: (env) => orders.reduce((r, n, i) => (n === 0 ? r : r * env[i] ** n), env[constant]),
  gradient(env, out) {
    orders.forEach((n, j) => {
      out[j] =
        n === 0 ? 0 : orders.reduce((r, m, i) => r * (i === j ? n * env[i] ** (n - 1) : env[i] ** m), env[constant]);
    });
  },
});

export function chemistryOf(
  species: readonly string[],
  constants: Record<string, number>,
  laws: readonly Law[],
): Chemistry {
  const named = Object.entries(constants).map(([name, k]) => ({ name, at, value: value(k) }));
  return {
    title: "made by hand",
    at,
    path: "",
    species: species.map((name) => ({ name, at, molarMass: undefined })),
    constants: named,
    order: named.map((_, i) => i),
    temperatureSlot: species.length + named.length,
    needsTemperature: false,
    reactions: laws.map((law, k) => ({
      text: `reaction ${k + 1}`,
      at,
      counts: "molecules",
      makes: law.makes.flatMap((number, s) => (number === 0 ? [] : [{ species: s, number: () => number }])),
      rate: law.rate,
      writeRate: (env, out, at) => {
        out[at] = law.rate(env);
      },
      gradient: law.gradient,
    })),
    bases: [species.map(() => molar)],
  };
}

/** A -> of order n with constant k: no product is counted. */
export const decay = (k: number, n: number): Chemistry => chemistryOf(["A"], { k }, [power(1, [n], [-1])]);

export function dutyOf(chemistry: Chemistry | undefined, feeds: Record<string, Record<string, number>>): Duty {
  return {
    title: "made by hand",
    at,
    path: "",
    chemistry,
    flows: new Map(),
    with: new Map(),
    settings: new Map(),
    feeds: new Map(
      Object.entries(feeds).map(([feed, brings]) => [
        feed,
        { at, species: new Map(Object.entries(brings).map(([s, c]) => [s, { at, value: value(c) }])) },
      ]),
    ),
    temperature: undefined,
    concentrations: chemistry?.species.map(() => molar) ?? [],
    report: [],
  };
}

/** Conversion of the first species over all outlets. */
export const left = (fed: Float64Array, out: Float64Array): number => (fed[0] - out[0]) / fed[0];
