import { describe, expect, test } from "vitest";
import { at, backmix, json } from "../cli/fake.js";

const files = {
  "net.yaml": `network: Chain
format: 1
feeds: {feed: {flow: 1 L/min, to: chain}}
compartments: {chain: {kind: stirred, volume: 10 L, repeat: 3, to: out}}
outlets: [out]
`,
  "duty.yaml": `duty: Kill
format: 1
chemistry: c.yaml
feeds: {feed: {A: 1 mol/L}}
report: [conversion of A]
`,
  "c.yaml": `chemistry: First
format: 1
species: {A: {}, P: {}}
constants: {k: 0.1 1/min}
reactions: [{equation: A -> P, rate: k * A}]
`,
  "study.yaml": `study: How many tanks
format: 1
rivals: [net.yaml]
duties: [duty.yaml]
sweeps: [{duty: duty.yaml, over: {chain.repeat: {between: [1, 4], points: 4}, k: {between: [0.1 1/min, 0.2 1/min], points: 2}}}]
`,
};

/** 1 - (1 + k tau / n)^-n. */
const converted = (k: number, n: number): number => 1 - (1 + (10 * k) / n) ** -n;

describe("the number of tanks in a row is an input of sweeps", () => {
  test("in whole steps, against the closed form", async () => {
    const { document } = await json(["sweep", "net.yaml", "--duty", "duty.yaml", "--over", "chain.repeat=1..5"], {
      files,
    });
    expect(at(document, "points")).toHaveLength(5);
    for (const n of [1, 2, 3, 4, 5]) {
      expect(at(document, `points.${n - 1}.at.0.value`)).toBe(n);
      expect(at(document, `points.${n - 1}.figures.0.value`)).toBeCloseTo(converted(0.1, n), 9);
    }
    // Steps are no jumps to tell of.
    expect(at(document, "jumps")).toEqual([]);
  });

  test("in a study, beside another input", async () => {
    const { document, status } = await json(["study", "study.yaml"], { files });
    expect(status).toBe(0);
    const points = at(document, "sweeps.0.points") as object[];
    expect(points).toHaveLength(8);
    for (const p of points) {
      const [n, k] = [at(p, "at.0.value") as number, at(p, "at.1.value") as number];
      expect(at(p, "figures.0.value")).toBeCloseTo(converted(k, n), 9);
    }
  });

  test("no half tanks; an aim does not move it", async () => {
    const base = ["sweep", "net.yaml", "--duty", "duty.yaml"];
    const half = await backmix([...base, "--over", "chain.repeat=1..2.5"], { files });
    expect([half.status, half.err]).toEqual([2, expect.stringContaining("moves in whole steps")]);
    const aim = await backmix([...base, "--aim", "conversion of A >= 60 %", "--by", "chain.repeat"], { files });
    expect([aim.status, aim.err]).toEqual([2, expect.stringContaining("'chain.repeat' moves in whole steps")]);
  });

  test.each([
    ["sweep", "--aim", "conversion of A >= 60 %", "--by", "chain.repeat", "--between", "1..4"],
    ["simulate", "--set", "chain.repeat=2"],
    ["simulate", "--states", "chain.repeat=1..4"],
  ])("elsewhere a sweep is named: %s %s", async (command, ...more) => {
    const { err, status } = await backmix([command, "net.yaml", "--duty", "duty.yaml", ...more], { files });
    expect(status).toBe(2);
    expect(err).toContain("'chain.repeat' moves in whole steps");
    expect(err).toContain('--over "chain.repeat=1..8"');
  });
});
