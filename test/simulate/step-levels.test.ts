import { expect, test } from "vitest";
import { parseTrial } from "../../src/parse/trial.js";
import { ode } from "../../src/simulate/ode.js";
import { trialResponse } from "../../src/simulate/trial.js";
import { plantOf } from "./plants.js";

const plants = {
  volume: plantOf(
    "network: V\nformat: 1\nfeeds: {feed: {flow: 2 L/min, to: a}}\ncompartments: {a: {kind: stirred, volume: 4 L, to: out}}\noutlets: [out]\n",
  ),
  mass: plantOf(
    "network: M\nformat: 1\nbasis: mass\nfeeds: {feed: {flow: 2 kg/min, to: a}}\ncompartments: {a: {kind: stirred, volume: 4 kg, to: out}}\noutlets: [out]\n",
  ),
};

// A tank of 2 min after 3 min of a step, in the unit of the step: 1 - exp(-3/2).
const reached = 1 - Math.exp(-1.5);

test.each([
  ["volume", "5 g/L", 5],
  ["volume", "0.2 mol/L", 200],
  ["volume", "5 %", 0.05],
  ["volume", "20 ppm", 2e-5],
  ["volume", "0.1 mol/kg", 0.1],
  ["volume", "0.1", 0.1],
  ["mass", "5 g/kg", 0.005],
  ["mass", "5 %", 0.05],
  ["mass", "0.1 mol/kg", 0.1],
  ["mass", "5 g/L", 5],
] as const)("a step of a concentration enters as it is written, whatever the flow: by %s, %s", (basis, level, si) => {
  const { document } = parseTrial(
    `trial: T\nformat: 1\ninjection: {at: feed, step: ${level}}\nreadings: [{at: out}]\n`,
    { path: "t.yaml" },
  );
  if (!document) throw new Error("no trial");
  const wanted = [{ time: Float64Array.of(180) }];
  for (const engine of [undefined, ode]) {
    const [[value]] = trialResponse(plants[basis], document, wanted, engine);
    expect(value / (si * reached)).toBeCloseTo(1, 8);
  }
});
