import type { Plant } from "../compile/plant.js";
import { isClosed } from "../model/network.js";
import { meanAges } from "../simulate/ages.js";
import { dimensions } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { Balance } from "./balances.js";
import { concentration, held, spaceTime, texQuantity, throughFlow, volume } from "./tex.js";

/** The balances of the whole vessel: its liquid, the substance in it, and how long that stays. */
export function totals(plant: Plant, balances: readonly Balance[]): string {
  const { network, feeds, outlets } = plant;
  const flow = network.units.unitFor(dimensions.flow);
  const q = feeds.reduce((s, f) => s + f.flow, 0);
  const out = outlets.reduce((s, o) => s + o.flow, 0);
  if (isClosed(plant)) {
    const all = sum(balances.flatMap(heldIn));
    return `The vessel is closed: nothing enters or leaves. Substance: $${all}$ stays what it is, which is the sum of all balances above; where all is mixed, the concentration is that amount over $V$.`;
  }
  const lines = [
    `${network.basis === "mass" ? "Mass" : "Liquid"}: $${sum(feeds.map((f) => throughFlow(f.name)))} = ${sum(outlets.map((o) => throughFlow(o.name)))}$, that is ${formatQuantity(q, flow, 6)} in and ${formatQuantity(out, flow, 6)} out.`,
    `Substance: $\\frac{d}{dt}\\left(${sum(balances.flatMap(heldIn))}\\right) = ${carried(feeds)} - ${outlets.length > 1 ? `\\left(${carried(outlets)}\\right)` : carried(outlets)}$, which is the sum of all balances above.`,
  ];
  if (q > 0 && out > 0) lines.push(meanTime(plant, q));
  return lines.join("\n\n");
}

const sum = (parts: readonly string[]): string => (parts.length > 0 ? parts.join(" + ") : "0");

const carried = (ports: readonly { name: string }[]): string =>
  sum(ports.map((p) => `${throughFlow(p.name)} ${concentration(p.name)}`));

/** What a node holds of the substance. */
function heldIn({ is, name }: Balance): string[] {
  if (is === "state") return [`${volume(name)} ${concentration(name)}`];
  if (is === "body") return [held(name)];
  return is === "delay"
    ? [`${throughFlow(name)} \\int_{t}^{t + ${spaceTime(name)}} ${concentration(name)}(t')\\,dt'`]
    : [];
}

/** Volume over flow, and the exact mean of what leaves where that is another: substance may cross an open end several times. */
function meanTime(plant: Plant, q: number): string {
  const { network, outlets, volume: v } = plant;
  const ages = meanAges(plant);
  const wet = outlets.filter((o) => o.flow > 0);
  const mean = wet.reduce((s, o) => s + o.flow * ages[o.node], 0) / wet.reduce((s, o) => s + o.flow, 0);
  const tau = v.active / q;
  const ratio = `V_\\text{active} / Q = ${texQuantity(tau, network.units.time)}`;
  if (Math.abs(mean - tau) <= 1e-9 * tau) return `Mean time: $\\tau = ${ratio}$.`;
  return `Mean time of what leaves: $\\bar t = ${texQuantity(mean, network.units.time)}$, from the slopes of the transfer functions at $s = 0$. It is not $${ratio}$.`;
}
