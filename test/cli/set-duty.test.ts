import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";

const files = {
  "net.yaml": `network: Tank
format: 1
feeds: {feed: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 10 L, to: out}}
outlets: [out]
`,
  "duty.yaml": `duty: Second order
format: 1
chemistry: c.yaml
feeds: {feed: {A: 1 mol/L ± 5 %}}
report: [A at out, time A at out above 0.2 mol/L]
`,
  "c.yaml": `chemistry: Second order
format: 1
species: {A: {}, P: {}}
constants: {k: 0.1 L/mol/min}
reactions: [{equation: A -> P, rate: k * A^2}]
`,
  "hot.yaml": `duty: Warmed
format: 1
chemistry: warm.yaml
feeds: {feed: {A: 1 mol/L, temperature: 300 K}}
heat: {tank: {jacket: 320 K, conductance: 50 W/K}}
report: [temperature at out]
`,
  "warm.yaml": `chemistry: Slow
format: 1
species: {A: {}, P: {}}
constants: {k: 1e-12 1/min}
medium: {heat-capacity: 4 kJ/L/K}
reactions: [{equation: A -> P, rate: k * A, heat: -1 kJ/mol}]
`,
};

const simulate = ["simulate", "net.yaml", "--duty", "duty.yaml"];
/** k tau c^2 + c = c0. */
const left = (k: number, c0: number): number => (Math.sqrt(1 + 4 * k * 10 * c0) - 1) / (2 * k * 10);

describe("--set moves what a duty says", () => {
  test("constants and feeds, with flows of the network beside them", async () => {
    const A = async (...set: string[]): Promise<unknown> =>
      at((await json([...simulate, ...set.flatMap((s) => ["--set", s])], { files })).document, "report.0.value");
    expect(await A()).toBeCloseTo(left(0.1, 1), 9);
    expect(await A("k=0.3 L/mol/min")).toBeCloseTo(left(0.3, 1), 9);
    expect(await A("feed.A=2 mol/L", "k=0.05 L/mol/min", "feed.flow=2 L/min")).toBeCloseTo(left(0.025, 2), 9);
  });

  test("in time and in a sweep, where it is then known: no ± is left of it", async () => {
    const set = ["--set", "feed.A=2 mol/L"];
    const { document } = await json([...simulate, "--transient", "--until", "200 min", ...set], { files });
    const outlet = at(document, "outlets.out.A.value.values") as number[];
    expect(outlet[outlet.length - 1]).toBeCloseTo(left(0.1, 2), 6);
    const over = ["sweep", "net.yaml", "--duty", "duty.yaml", "--over", "k=0.1..0.2 L/mol/min:2", "--draws", "50"];
    const swept = (await json([...over, ...set], { files })).document;
    expect(at(swept, "points.1.figures.0.value")).toBeCloseTo(left(0.2, 2), 9);
    expect(at(swept, "points.1.figures.0.interval95")).toBeNull();
    const unsure = (await json(over, { files })).document;
    expect(at(unsure, "points.1.figures.0.interval95")).not.toBeNull();
  });

  test("jackets, feed temperatures and the heat capacity", async () => {
    const args = ["simulate", "net.yaml", "--duty", "hot.yaml"];
    const set = ["--set", "tank.jacket=340 K", "--set", "feed.temperature=310 K", "--set", "heat-capacity=2 kJ/L/K"];
    const { document } = await json([...args, ...set], { files });
    const flow = 2000 / 60;
    expect(at(document, "report.0.value")).toBeCloseTo((flow * 310 + 50 * 340) / (flow + 50), 6);
  });

  test("what makes no sense there is refused", async () => {
    const err = async (...set: string[]): Promise<string> => {
      const ran = await backmix([...simulate, ...set.flatMap((s) => ["--set", s])], { files });
      expect(ran.status).toBe(2);
      return ran.err;
    };
    expect(await err("k=-1 L/mol/min")).toContain("would run backwards");
    expect(await err("feed.A=-1 mol/L")).toContain("must be 0 or more");
    expect(await err("feed.A=1 L")).toContain("--set feed.A=1 L");
    expect(await err("feed.B=1 mol/L")).toContain("did you mean 'feed.A'?");
  });
});
