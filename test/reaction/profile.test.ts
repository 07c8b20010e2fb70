import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import type { Duty } from "../../src/model/duty.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { profilesAlong } from "../../src/reaction/profile.js";
import { type SteadyState, steadyState } from "../../src/reaction/steady.js";

/** Demo values: 50 kJ/mol in 4.1 kJ/(L K), 1 mol/L warms the liquid by 12.2 K. */
const chemistry = `chemistry: made for a test
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 350 K, value: 0.5 1/min, activation: 72.75 kJ/mol}}
reactions:
  - {equation: A -> P, rate: k * A, heat: -50 kJ/mol}
medium: {heat-capacity: 4.1 kJ/L/K}
`;
const isothermal = "duty: d\nformat: 1\nchemistry: c.yaml\ntemperature: 350 K\nfeeds: {feed: {A: 1 mol/L}}\n";
const adiabatic = isothermal
  .replace("temperature: 350 K", "heat: adiabatic")
  .replace("A: 1 mol/L", "A: 1 mol/L, temperature: 350 K");

function settled(bodies: string, to: string, dutyText: string): { plant: Plant; duty: Duty; state: SteadyState } {
  const network = `network: n\nformat: 1\nfeeds: {feed: {flow: 10 L/min, to: ${to}}}\ncompartments:\n${bodies}outlets: [product]\n`;
  const read = (path: string): string | undefined => (path === "c.yaml" ? chemistry : undefined);
  const { document: n } = parseNetwork(network, { path: "n.yaml", read });
  const { document: duty } = parseDuty(dutyText, { path: "d.yaml", read });
  const plant = compile(n!).plant!;
  return { plant, duty: duty!, state: steadyState(plant, duty!.chemistry, duty!) };
}

const along = ({ plant, duty, state }: ReturnType<typeof settled>) => profilesAlong(plant, duty.chemistry, duty, state);

describe("along a body", () => {
  test("a first-order reactant fades in a tube as exp(-k t)", () => {
    const [body] = along(settled("  pipe: {kind: tubular, volume: 40 L, to: product}\n", "pipe", isothermal));
    expect(body.name).toBe("pipe");
    body.passed.forEach((x, k) => {
      expect(Math.abs(body.concentrations[0][k] / (1000 * Math.exp(-0.5 * 4 * x)) - 1)).toBeLessThan(1e-10);
    });
    expect(body.temperature).toBeUndefined();
  });

  test("axial dispersion between closed ends (Wehner & Wilhelm, Chem. Eng. Sci. 6 (1956) 89-93)", () => {
    const keys = "{kind: dispersed, volume: 40 L, peclet: 6, to: product}";
    const [body] = along(settled(`  bed: ${keys}\n`, "bed", isothermal));
    const [pe, da] = [6, 2];
    const a = Math.sqrt(1 + (4 * da) / pe);
    const below = (1 + a) ** 2 - (1 - a) ** 2 * Math.exp(-a * pe);
    const c = (x: number): number =>
      (2 * ((1 + a) * Math.exp((pe * (1 - a) * x) / 2) - (1 - a) * Math.exp(-a * pe + (pe * (1 + a) * x) / 2))) / below;
    body.passed.forEach((x, k) => {
      expect(Math.abs(body.concentrations[0][k] / 1000 - c(x))).toBeLessThan(1e-9);
    });
  });

  test("every line ends with what leaves; warmth follows conversion where no heat is lost; mixed bodies have none", () => {
    const bodies = `  pipe: {kind: tubular, volume: 20 L, to: bed}
  bed: {kind: dispersed, volume: 20 L, peclet: 3, stagnant: {volume: 4 L, exchange: 1 L/min}, to: tank}
  tank: {kind: stirred, volume: 10 L, to: {pipe: 3 L/min, rounds: rest}}
  rounds: {kind: laminar, volume: 5 L, to: product}
`;
    const done = settled(bodies, "pipe", adiabatic);
    const lines = along(done);
    expect(lines.map((l) => l.name)).toEqual(["pipe", "bed"]);
    for (const { name, concentrations, temperature } of lines) {
      const node = done.plant.exit.get(name)!;
      concentrations.forEach((c, i) => {
        expect(Math.abs(c[c.length - 1] - done.state.concentrations[node * 2 + i])).toBeLessThan(1e-6);
      });
      for (const [k, T] of temperature!.entries()) {
        const made = (1000 - concentrations[0][k]) / 1000;
        expect(T).toBeCloseTo(350 + made * (50 / 4.1), 6);
      }
    }
  });
});
