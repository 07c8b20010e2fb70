import { describe, expect, test } from "vitest";
import { writtenLaws } from "../../src/reaction/circle-loops.js";
import { conditionsOf } from "../../src/reaction/conditions.js";
import { conservedBy } from "../../src/reaction/conserved.js";
import { steadyState } from "../../src/reaction/steady.js";
import { read } from "./read.js";

const head = (species: string, constants: string, reactions: readonly string[]): string =>
  `chemistry: Laws
format: 1
species: {${species}}
constants: {${constants}}
reactions:
${reactions.map((r) => `  - {${r}}`).join("\n")}
`;
const consecutive = head("A: {}, B: {}, R: {}, S: {}", "k1: 2 L/mol/min, k2: 0.5 L/mol/min", [
  "equation: A + B -> R, rate: k1 * A * B",
  "equation: R + B -> S, rate: k2 * R * B",
]);
const chemistries: Readonly<Record<string, string>> = {
  "one species that moves": head("A: {}, B: {}", "k: 2 L/mol/min", ["equation: A + A -> B, rate: k * A^2"]),
  "two, with two that follow": consecutive,
  "a rate that saturates": head("A: {}, B: {}, P: {}", "v: 0.3 mol/L/min, K: 0.2 mol/L", [
    "equation: A -> P, rate: v * A / (K + A)",
    "equation: A + B -> P, rate: v / K * B * A / (K + B)",
  ]),
  "one that goes back, and three more": head(
    "A: {}, P: {}, B: {}, D: {}, E: {}",
    "kf: 3 1/min, kb: 1 1/min, k2: 2 L/mol/min, k3: 0.7 1/min",
    [
      "equation: A -> P, rate: kf * A - kb * P",
      "equation: P + B -> D, rate: k2 * P * B",
      "equation: D -> E, rate: k3 * D",
      "equation: E -> B, rate: k3 * E",
    ],
  ),
};
/** A row of tanks with backflow that ends in a junction from which part goes back: one circle, cells and joints in it. */
const network = `network: Row
format: 1
feeds: {feed: {flow: 10 L/min, to: a}}
compartments:
  a: {kind: stirred, repeat: 150, backflow: 7 L/min, volume: 300 L, to: split}
  split: {kind: junction, to: {b: 60 %, out: rest}}
  b: {kind: stirred, repeat: 100, backflow: 2 L/min, volume: 30 L, to: a}
outlets: [out]
`;
const duty = `duty: Normal
format: 1
chemistry: c.yaml
feeds: {feed: {A: 1 mol/L, B: 0.8 mol/L}}
temperature: 25 degC
report: [conversion of A]
`;

describe.each(Object.entries(chemistries))("%s", (_, text) => {
  const { plant, duty: normal } = read(network, duty, text);
  const chemistry = normal.chemistry;
  if (!chemistry) throw new Error("no chemistry");
  const asCalled = { ...chemistry, reactions: chemistry.reactions.map((r) => ({ ...r, record: undefined })) };

  test("compiled loops give what the laws give that are called", () => {
    const [loops, calls] = [chemistry, asCalled].map((c) => steadyState(plant, c, { ...normal, chemistry: c }));
    expect([loops.converged, calls.converged]).toEqual([true, true]);
    loops.concentrations.forEach((c, i) => {
      expect(Math.abs(c - calls.concentrations[i])).toBeLessThan(1e-9 * 1000);
    });
    const { fed, made, left } = loops;
    fed.forEach((f, i) => {
      expect(Math.abs(f + made[i] - left[i])).toBeLessThan(1e-12 * fed[0]);
    });
  });

  test("they are used here, and not where laws are only called", () => {
    const written = [chemistry, asCalled].map((c) => {
      const { reactions, numbers, size } = conditionsOf(plant, c, { ...normal, chemistry: c });
      return writtenLaws(reactions.cell, conservedBy(numbers, size), 0.01) !== undefined;
    });
    expect(written).toEqual([true, false]);
  });
});
