import { describe, expect, test } from "vitest";
import { at, backmix, json } from "../cli/fake.js";

/** A tank in which next to nothing reacts, and that warms its feed: the temperature follows by hand. */
const files = {
  "tank.yaml": `network: Tank
format: 1
feeds: {feed: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 10 L, to: out}}
outlets: [out]
`,
  "duty.yaml": `duty: Warmed
format: 1
chemistry: chem.yaml
feeds: {feed: {A: 1 mol/L, temperature: 300 K}}
heat: {tank: {jacket: 320 K, conductance: 50 W/K}}
heat-exchange: [{warms: feed, from: out, effectiveness: 50 % ± 4 %}]
report: [temperature at out]
`,
  "chem.yaml": `chemistry: Slow
format: 1
species: {A: {}, P: {}}
constants: {k: 1e-12 1/min}
medium: {heat-capacity: 4 kJ/L/K}
reactions: [{equation: A -> P, rate: k * A, heat: -1 kJ/mol}]
`,
};

describe("the effectiveness of an exchanger is an input", () => {
  test("of a sweep, with the ± that it declares", async () => {
    const over = [
      "sweep",
      "tank.yaml",
      "--duty",
      "duty.yaml",
      "--over",
      "feed.effectiveness=20 %..80 %:3",
      "--draws",
      "100",
    ];
    const { document } = await json(over, { files });
    // The tank at T: F c (1 - e) (T - 300 K) = U (320 K - T), the outlet having given e (T - 300 K) to the feed.
    const flow = 4000 / 60;
    const tank = (e: number): number => 300 + 20 / (1 + (flow * (1 - e)) / 50);
    const out = (e: number): number => tank(e) - e * (tank(e) - 300);
    [0.2, 0.5, 0.8].forEach((e, k) => {
      expect(at(document, `points.${k}.figures.0.value`)).toBeCloseTo(out(e), 6);
    });
    // Of a share `±` counts in the same points.
    const [low, high] = at(document, "points.1.figures.0.interval95") as number[];
    const exact = [0.5 + 1.96 * 0.04, 0.5 - 1.96 * 0.04].map(out);
    expect(Math.abs(low - exact[0]) + Math.abs(high - exact[1])).toBeLessThan(0.15 * (exact[1] - exact[0]));
  });

  test("not beyond all that could pass", async () => {
    const over = ["sweep", "tank.yaml", "--duty", "duty.yaml", "--over", "feed.effectiveness=20 %..120 %:3"];
    const { status, err } = await backmix(over, { files });
    expect(status).toBe(2);
    expect(err).toContain("'feed.effectiveness' lies between 0 % and 100 %");
  });
});
