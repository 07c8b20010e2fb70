import { describe, expect, test } from "vitest";
import { parseTrial } from "../../src/parse/trial.js";
import { planTest } from "../../src/plan/plan.js";
import { tellApart } from "../../src/plan/tell-apart.js";
import { networkAt } from "../fit/load.js";
import { fitted, noisy, synthetic } from "../fit/synthetic.js";

const corner = networkAt("shared/parts/quiet-corner.yaml");
const pockets = networkAt("shared/parts/side-capture.yaml");
const parallel = networkAt("shared/parts/parallel-tanks.yaml");

function draft(floor: number) {
  const { document } = parseTrial(`trial: Draft
format: 1
injection: {at: feed, pulse: 50 g}
readings:
  - at: out
    noise: {floor: ${floor} g/L}
`);
  if (!document) throw new Error("no draft");
  const { plan } = planTest(corner, document, { samples: 40 });
  if (!plan) throw new Error("no plan");
  return { trial: document, plan };
}

describe("the test that tells two networks apart", () => {
  test("none does where both have one curve", () => {
    const { trial, plan } = draft(0.0005);
    const [best] = tellApart(corner, parallel, trial, plan);
    expect(best.difference).toBeLessThan(1e-6);
  });

  test("less noise tells more, by its square", () => {
    const [a, b] = [0.001, 0.0005].map((floor) => {
      const { trial, plan } = draft(floor);
      return tellApart(corner, pockets, trial, plan).find((t) => t.says === "the test as drafted");
    });
    expect((b?.difference ?? 0) / (a?.difference ?? 1)).toBeCloseTo(4, 2);
    expect(b?.chance ?? 0).toBeGreaterThan(a?.chance ?? 1);
  });

  // Normal errors: of 30 tests the sum of squares must prefer the truth as often as promised.
  test("the chance is that with which simulated tests prefer the truth", () => {
    const { trial, plan } = draft(0.001);
    const drafted = tellApart(corner, pockets, trial, plan).find((t) => t.says === "the test as drafted");
    const chance = drafted?.chance ?? 0;
    expect(chance).toBeGreaterThan(0.6);
    expect(chance).toBeLessThan(0.97);
    const times = Array.from(plan.readings[0].times, (t) => t / 60);
    const preferred = Array.from({ length: 30 }, (_, k) => {
      const noise = noisy(k + 1, 0.001);
      const one = synthetic(corner, {}, { injection: "{at: feed, pulse: 50 g}", at: "out", times, noise });
      return fitted(corner, [one], { starts: 0 }).aicc < fitted(pockets, [one], { starts: 2 }).aicc;
    });
    const share = preferred.filter(Boolean).length / 30;
    expect(Math.abs(share - chance)).toBeLessThan(3 * Math.sqrt((chance * (1 - chance)) / 30));
  });
});
