import { describe, expect, test } from "vitest";
import { backmix } from "./fake.js";

const files = {
  "net.yaml": `network: Tank
format: 1
feeds: {feed: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 10 L, to: product}}
outlets: [product]
`,
  "duty.yaml": `duty: Slips
format: 1
chemistry: hot.yaml
feeds: {feed: {A: 2 mol/L, temperature: 330 K}}
heat: {tubee: {jacket: 300 K, conductance: 4 W/K}, product: {jacket: 300 K, conductance: 4 W/K}, tank: {jacket: 300 K, conductance: -4 W/K}}
with: {kff: 3 1/min}
local: {tubb: {kz: 1 1/min}}
contents: {tnak: {A: 1 mol/L}}
report: [conversion of A, A at nowhere]
`,
  "hot.yaml": `chemistry: Hot
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 300 K, value: 0.001 1/min, activation: 80 kJ/mol}}
medium: {heat-capacity: 4 kJ/L/K}
reactions: [{equation: A -> P, rate: k * A, heat: -200 kJ/mol}]
`,
};

describe("slips in a duty", () => {
  test.each([
    ["simulate", "net.yaml", "--duty", "duty.yaml"],
    ["simulate", "net.yaml", "--duty", "duty.yaml", "--transient"],
    ["simulate", "net.yaml", "--duty", "duty.yaml", "--states", "feed.flow=1 L/min..2 L/min"],
    ["sweep", "net.yaml", "--duty", "duty.yaml", "--over", "feed.flow=1 L/min..2 L/min:3"],
  ])("are told all at once, those of the file and those beside the network: %s %s %s %s %s", async (...args) => {
    const { status, err } = await backmix(args, { files });
    expect(status).toBe(1);
    const told = [...err.matchAll(/^duty\.yaml:(\d+):\d+ ([\w-]+): (.*)$/gm)].map((m) => `${m[1]} ${m[2]}`);
    expect(told).toEqual([
      "5 unknown-place",
      "5 unknown-place",
      "5 below-zero",
      "6 unknown-place",
      "7 unknown-place",
      "7 unknown-place",
      "8 unknown-place",
      "9 unknown-place",
    ]);
    for (const name of ["tubee", "product", "kff", "tubb", "kz", "tnak", "nowhere"]) expect(err).toContain(`'${name}'`);
  });
});
