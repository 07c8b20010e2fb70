import { describe, expect, test } from "vitest";
import { at, backmix, json } from "../cli/fake.js";

/** A tank of 10 L +- 4 % at 1 L/min +- 3 %, first order at 0.1 1/min +- 5 %: nobody has tested it. */
const files = {
  "study.yaml": `study: No trials
format: 1
rivals: [net.yaml]
duties: [duty.yaml]
changes: [big.yaml]
`,
  "net.yaml": `network: Ideal tank
format: 1
constants: {V: 10 L ± 4 %}
feeds: {feed: {flow: 1 L/min ± 3 %, to: tank}}
compartments: {tank: {kind: stirred, volume: V, to: out}}
outlets: [out]
`,
  "duty.yaml": `duty: Base
format: 1
chemistry: c.yaml
feeds: {feed: {A: 1 mol/L}}
report: [conversion of A]
`,
  "c.yaml": `chemistry: first
format: 1
species: {A: {}, P: {}}
constants: {k: 0.1 1/min ± 5 %}
reactions: [{equation: A -> P, rate: k * A}]
`,
  "big.yaml": `network: Twice the tank
format: 1
change: {constants: {V: 20 L ± 4 %}}
`,
};

describe("a study without trials", () => {
  test("predicts from the network as written, with every declared ±, and says that nothing was tested", async () => {
    const { status, document } = await json(["study", "study.yaml"], { files });
    expect(status).toBe(0);
    expect(at(document, "ranking.0.survives")).toBe(true);
    expect(at(document, "predictions.0.value")).toBeCloseTo(0.5, 9);
    const [low, high] = at(document, "predictions.0.interval95") as number[];
    // x = Da / (1 + Da), Da = 1 within sqrt(4² + 3² + 5²) %, so x within half as many points over two.
    const half = (1.96 * Math.sqrt(0.04 ** 2 + 0.03 ** 2 + 0.05 ** 2)) / 4;
    expect((high - low) / (2 * half)).toBeGreaterThan(0.85);
    expect((high - low) / (2 * half)).toBeLessThan(1.15);
    expect(at(document, "changes.0.value")).toBeCloseTo(2 / 3, 9);
    const { out, err } = await backmix(["study", "study.yaml"], { files });
    expect(out.replace(/\s+/g, " ")).toContain("No test stands behind this: 'Ideal tank' is taken as it is written");
    expect(out + err).not.toContain("converge");
    expect(out).not.toContain("no fit");
  });

  test("tells from when to when to divert, over the draws, where a duty goes on in time", async () => {
    const upset = files["duty.yaml"]
      .replace("A: 1 mol/L", "A: {from: 1 mol/L, to: 2 mol/L, start: 10 min, lasting: 20 min}")
      .replace("report: [", "report: [time A at out above 0.7 mol/L, ");
    const { document } = await json(["study", "study.yaml"], { files: { ...files, "duty.yaml": upset } });
    // From 0.5 towards 1 mol/L and back, both at 0.2 1/min.
    const begins = 10 + Math.log(0.5 / 0.3) / 0.2;
    const ends = 30 + Math.log((0.5 * (1 - Math.exp(-4))) / 0.2) / 0.2;
    const window = at(document, "predictions.0.diversion");
    expect(at(document, "predictions.0.value")).toBeCloseTo(ends - begins, 3);
    expect(at(window, "touched")).toBe(1);
    const [from, to] = [at(window, "from.value") as number, at(window, "to.value") as number];
    expect(begins - from).toBeGreaterThan(0.2);
    expect(begins - from).toBeLessThan(1.5);
    expect(to - ends).toBeGreaterThan(0.4);
    expect(to - ends).toBeLessThan(3);
    expect(at(window, "volume.value")).toBeCloseTo(to - from, 6);
  });
});
