import type { Block } from "../../src/compartments/block.js";
import { cascade } from "../../src/compartments/cascade.js";
import type { NodeMaker } from "../../src/compartments/kind.js";
import type { Plant } from "../../src/compile/plant.js";
import { vessel } from "../transfer/vessel.js";
import { plantOf } from "./plants.js";
import { vessels } from "./vessels.js";

const body = (keys: string) => vessel(`  a: {${keys}, to: out}`);

/** The vessels of shared/reference/closed-forms/cases.json whose bodies are known by their transfer functions. */
const blockVessels: Readonly<Record<string, string>> = {
  "gamma-N2.5-tau4": body("kind: cascade, volume: 4 L, tanks: 2.5"),
  "gamma-N4.76-tau15": body("kind: cascade, volume: 15 L, tanks: 4.76"),
  "dispersion-closed-Pe1-tau1": body("kind: dispersed, volume: 1 L, peclet: 1"),
  "dispersion-closed-Pe8-tau20": body("kind: dispersed, volume: 20 L, peclet: 8, ends: closed"),
  "dispersion-closed-Pe40-tau1": body("kind: dispersed, volume: 1 L, peclet: 40"),
  "dispersion-open-Pe4-tau1": body("kind: dispersed, volume: 1 L, peclet: 4, ends: open"),
  "dispersion-open-Pe20-tau6": body("kind: dispersed, volume: 6 L, peclet: 20, ends: open"),
  "laminar-tau2": body("kind: laminar, volume: 2 L"),
};

/** A plant for every closed form, with a flow of 1 L/min. */
export const closedFormPlants: Readonly<Record<string, () => Plant>> = {
  ...Object.fromEntries(
    Object.entries({ ...vessels, ...blockVessels }).map(([name, text]) => [name, () => plantOf(text)]),
  ),
  "gamma-N0.8-tau1": fewerThanOneTank,
};

/** A cascade of 0.8 tanks: refused as a document, a test of the transfer function. */
function fewerThanOneTank(): Plant {
  const made: Block[] = [];
  const maker = { through: 1, block: (block: Block) => made.push(block) - 1 } as unknown as NodeMaker;
  cascade.spell(maker, { values: { volume: 1e-3, tanks: 0.8 }, counts: {}, words: {}, shares: new Set(["tanks"]) });
  const plant = plantOf(body("kind: cascade, volume: 1 L, tanks: 2"));
  const nodes = plant.nodes.map((node) => (node.block ? { ...node, block: made[0] } : node));
  return { ...plant, nodes };
}
