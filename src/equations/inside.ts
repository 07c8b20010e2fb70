import type { Plant, PlantNode } from "../compile/plant.js";
import { broughtTo } from "../compile/through.js";
import { membersOf } from "../model/members.js";
import type { Compartment } from "../model/network.js";
import { dimensionKey, dimensions } from "../units/dimension.js";
import type { Link } from "./links.js";
import { keyOf, throughFlow, volume } from "./tex.js";

/** The formula of a flow inside a compartment, where its keys give one; else its symbol alone. */
export function innerFlow(plant: Plant, { from, to, flow, symbol }: Link): string {
  const [a, b] = [placeOf(plant, plant.nodes[from]), placeOf(plant, plant.nodes[to])];
  if (!a || !b || a.body !== b.body) return symbol;
  const { body, count } = a;
  const key = `${a.inner || b.inner}.exchange`;
  if (holds(plant, body, key, count * flow)) return `${symbol} = ${shared(keyOf(key, body.name), count)}`;
  // Without a flow or share among its keys there is nothing but the through-flow to go round inside.
  const mixed =
    Object.values(body.values).some((v) => flowing.has(dimensionKey(v.dimension))) ||
    Math.abs(flow - broughtTo(plant, body.name)) > 1e-9 * flow; // a member that streams enter has more behind it
  return mixed || body.zones || a.inner || b.inner ? symbol : `${symbol} = ${throughFlow(body.name)}`;
}

/** The same for the volume of a node that is part of a compartment. */
export function innerVolume(plant: Plant, node: PlantNode): string {
  const { body, count, inner } = placeOf(plant, node) ?? {};
  const symbol = volume(node.name);
  if (!body || count === undefined) return symbol;
  const key = inner ? `${inner}.volume` : "volume";
  return holds(plant, body, key, count * node.volume)
    ? `${symbol} = ${shared(key === "volume" ? volume(body.name) : keyOf(key, body.name), count)}`
    : symbol;
}

const flowing = new Set([dimensions.flow, dimensions["mass rate"], dimensions.ratio].map(dimensionKey));

const shared = (symbol: string, count: number): string => (count > 1 ? `${symbol} / ${count}` : symbol);

/** Is it what a key says? Formulas are only written where they give the number that the plant has. */
function holds({ env }: Plant, { values }: Compartment, key: string, value: number): boolean {
  const said = values[key]?.of(env);
  return said !== undefined && Math.abs(said - value) <= 1e-9 * Math.abs(said);
}

/** Which of a compartment's equal members a node belongs to, how many there are, and which part of the member it is. */
function placeOf(
  { network }: Plant,
  { name }: PlantNode,
): { body: Compartment; count: number; inner: string } | undefined {
  const body = network.compartments.find((c) => name === c.name || name.startsWith(`${c.name}.`));
  if (!body) return undefined;
  const members = membersOf(body);
  const member = members.find((m) => name === m || name.startsWith(`${m}.`)) ?? body.name;
  return { body, count: Math.max(1, members.length), inner: name.slice(member.length + 1) };
}
