import { describe, expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import { networkModel } from "../../src/fit/network-model.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { random } from "../../src/numerics/random.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { asLogged } from "../../src/plan/expected.js";
import { planTest } from "../../src/plan/plan.js";
import type { Plan } from "../../src/plan/result.js";
import { samplerTime } from "../../src/plan/sheet.js";

const networkOf = (text: string): Network => {
  const { document, problems } = parseNetwork(text);
  if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
  return document;
};
const draftOf = (injection: string, reading: string, top = ""): Trial => {
  const text = `trial: Draft\nformat: 1\ninjection: ${injection}\n${top}\nreadings: [{at: product, ${reading}}]\n`;
  const { document, problems } = parseTrial(text);
  if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
  return document;
};
const planOf = (network: Network, trial: Trial, options: Partial<Parameters<typeof planTest>[2]> = {}): Plan => {
  const { plan } = planTest(network, trial, { samples: 40, ...options });
  if (!plan) throw new Error("no plan");
  return plan;
};

const minute = 60;
/** V = Q = 1 on the file's scale: 100 L, 1 L/min, so that a mean time is 100 min. */
const tank = networkOf(`network: Tank
format: 1
feeds: {feed: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 100 L, to: product}}
outlets: [product]
`);
const corner = networkOf(`network: Tank with a quiet corner
format: 1
parameters: {held: {value: 20 L, between: [1 L, 60 L]}, renewal: {value: 0.05 L/min, between: [0.001 L/min, 2 L/min], spacing: log}}
feeds: {feed: {flow: 1 L/min, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: 100 L - held, to: product, exchange: {quiet: renewal}}
  quiet: {kind: stirred, volume: held}
outlets: [product]
`);
const plain = draftOf("{at: feed, pulse: 100 g}", "noise: {floor: 0.005 g/L}");

// Shares of area, mean and variance that a test sees which stops early: by the closed forms of one and two exponentials.
describe("what stopping early cuts off", () => {
  test.each([
    [tank, 3, 0.95, 0.843, 0.5],
    [tank, 5, 0.993, 0.966, 0.83],
    [corner, 3, 0.948, 0.72, 0.16],
    [corner, 5, 0.977, 0.811, 0.26],
    [corner, 10, 0.993, 0.911, 0.5],
  ])("%# after so many mean times", (network, means, area, mean, variance) => {
    const plan = planOf(network, plain, { until: means * 100 * minute });
    const found = plan.truncation.find((t) => Math.abs(t.stop - means * 100 * minute) < 1e-6 * t.stop);
    expect(found?.area).toBeCloseTo(area, 2);
    expect(found?.mean).toBeCloseTo(mean, 2);
    expect(found?.variance).toBeCloseTo(variance, 1);
  });

  test("is an alarm that names the dead volume it would be taken for", () => {
    const plan = planOf(corner, plain, { until: 300 * minute });
    expect(plan.alarms.find((a) => a.code === "stops-early")?.message).toContain("28 % dead volume");
    expect(planOf(corner, plain).alarms.map((a) => a.code)).not.toContain("stops-early");
  });

  test("the end that it finds has seen 98 % of the mean", () => {
    for (const network of [tank, corner]) {
      const plan = planOf(network, plain);
      const last = plan.truncation.find((t) => t.stop === plan.stop);
      expect(last?.mean).toBeGreaterThan(0.979);
      expect(plan.stop).toBeLessThan(20 * 100 * minute);
    }
  });
});

describe("the amount", () => {
  // A pulse of M into a tank of V peaks at M/V.
  test("for a tank: a peak of 100 times the noise, in closed form", () => {
    const plan = planOf(tank, draftOf("{at: feed, pulse: 100 g}", "noise: {floor: 0.005 g/L}"), {
      until: 200 * minute,
    });
    expect((plan.recommended?.value ?? 0) / (100 * 0.005 * 100 * 1e-3)).toBeCloseTo(1, 1);
  });

  test("stays below the limit of the detector, and says so", () => {
    const plan = planOf(
      tank,
      draftOf("{at: feed, pulse: 100 g}", "noise: {floor: 0.005 g/L}, limits: {above: 0.3 g/L}"),
    );
    expect((plan.recommended?.value ?? 0) / (0.8 * 0.3 * 100 * 1e-3)).toBeCloseTo(1, 1);
    expect(plan.alarms.map((a) => a.code)).toContain("over-limit");
  });

  test("none is recommended where no noise is declared: that is an alarm", () => {
    const plan = planOf(tank, draftOf("{at: feed, pulse: 100 g}", "scale: known"));
    expect(plan.recommended).toBeUndefined();
    expect(plan.alarms.map((a) => a.code)).toContain("noise-assumed");
  });
});

test("samples: ten before the injection, dense at first, then sparser, to the end", () => {
  const { readings, stop } = planOf(corner, plain);
  const { times } = readings[0];
  expect(times.filter((t) => t < 0).length).toBe(10);
  const after = [...times].filter((t) => t > 0);
  expect(after.length).toBeGreaterThanOrEqual(35);
  expect(Math.abs(after[after.length - 1] / stop - 1)).toBeLessThan(0.02);
  expect(after[after.length - 1] - after[after.length - 2]).toBeGreaterThan(5 * (after[1] - after[0]));
  expect([...times].every((t, i) => i === 0 || t > times[i - 1])).toBe(true);
});

test("expected intervals are what fits to many simulated tests scatter by", () => {
  const trial = draftOf(
    "{at: feed, pulse: 100 g ± 1 %}",
    "noise: {floor: 0.003 g/L, relative: 1 %}, baseline: constant",
  );
  const plan = planOf(corner, trial);
  const [{ times, expected, sd }] = plan.readings;
  const noise = random(17);
  const found: number[][] = [[], []];
  for (let run = 0; run < 30; run++) {
    const dose = 1 + 0.01 * noise.normal();
    const drawn = expected.map((c, i) => dose * c + 0.05 + sd[i] * noise.normal());
    const { fit: result } = fit(corner, [asLogged(trial, [times], [drawn])], { starts: 0 });
    result?.parameters.forEach((p, j) => {
      found[j].push(p.name === "renewal" ? Math.log(p.value) : p.value);
    });
  }
  plan.parameters.forEach((p, j) => {
    const mean = found[j].reduce((a, b) => a + b, 0) / found[j].length;
    const spread = Math.sqrt(found[j].reduce((s, v) => s + (v - mean) ** 2, 0) / (found[j].length - 1));
    expect(found[j].length).toBe(30);
    const claimed = p.name === "renewal" ? (p.sd ?? 0) / p.value : (p.sd ?? 0);
    // Thirty runs tell a spread to 13 %.
    expect(claimed / spread).toBeGreaterThan(0.7);
    expect(claimed / spread).toBeLessThan(1.4);
  });
});

test("what a test cannot tell is told before it is run", () => {
  const twins = networkOf(`network: Twins
format: 1
parameters: {first: {value: 30 L, between: [5 L, 80 L]}, second: {value: 20 L, between: [5 L, 80 L]}}
feeds: {feed: {flow: 1 L/min, to: leg}}
compartments:
  leg: {kind: tubular, volume: first, to: tail}
  tail: {kind: tubular, volume: second, to: tank}
  tank: {kind: stirred, volume: 50 L, to: product}
outlets: [product]
`);
  const plan = planOf(twins, plain);
  expect(plan.alarms.find((a) => a.code === "cannot-tell")?.message).toContain("first from second");
  expect(plan.parameters.every((p) => p.untold)).toBe(true);
});

test("the best times are better than the plan's, and as many", () => {
  const { readings } = planOf(corner, plain);
  const { best, times } = readings[0];
  expect(best?.times.length).toBe(times.filter((t) => t > 0).length);
  expect(best?.efficiency).toBeGreaterThan(0.2);
  expect(best?.efficiency).toBeLessThanOrEqual(1);
});

test("the planned curve is what the model says, at the trial's clock", () => {
  const late = draftOf("{at: feed, pulse: 100 g, start: 30 min}", "noise: {floor: 0.005 g/L}");
  const { readings } = planOf(corner, late);
  const clock = readings[0].times.map((t) => t + 30 * minute);
  const [direct] = networkModel(corner).respond(late, {}, [{ time: clock }]) ?? [];
  expect([...readings[0].expected]).toEqual([...direct]);
});

test("thousands of samples are refused: a plan is for people", () => {
  expect(planTest(tank, plain, { samples: 40, every: 0.1 }).problems.map((p) => p.code)).toEqual(["plan-many"]);
});

test("a closed vessel has no end: --until is asked for", () => {
  const flask = networkOf(`network: Two flasks
format: 1
compartments:
  a: {kind: stirred, volume: 1 L, exchange: {b: 0.1 L/min}}
  b: {kind: stirred, volume: 1 L}
`);
  const { document } = parseTrial(
    "trial: D\nformat: 1\ninjection: {at: a, pulse: 1 g}\nreadings: [{at: b, noise: {floor: 0.01 g/L}}]\n",
  );
  const { plan, problems } = planTest(flask, document as Trial, { samples: 20 });
  expect(plan).toBeUndefined();
  expect(problems.map((p) => p.code)).toEqual(["plan-endless"]);
  expect(
    planTest(flask, document as Trial, { samples: 20, until: 3600 }).plan?.readings[0].times.length,
  ).toBeGreaterThan(20);
});

test("times on the sheet are read from a stopwatch: no second is lost or added", () => {
  expect([-50, 0, 0.5, 59.96, 60, 3599.99, 5025, 240 * 3600].map(samplerTime)).toEqual([
    "−0:00:50",
    "0:00:00",
    "0:00:00.5",
    "0:01:00",
    "0:01:00",
    "1:00:00",
    "1:23:45",
    "240:00:00",
  ]);
});

describe("what passes at once", () => {
  const short = networkOf(`network: Tank with a shortcut
format: 1
feeds: {feed: {flow: 1 L/min, to: {product: 10 %, tank: rest}}}
compartments: {tank: {kind: stirred, volume: 100 L, to: product}}
outlets: [product]
`);
  const alarm = (injection: string) =>
    planOf(short, draftOf(injection, "noise: {floor: 0.005 g/L}")).alarms.find((a) => a.code === "comes-at-once");

  test("is an alarm that says how much, and that a sudden pulse hides it", () => {
    expect(alarm("{at: feed, pulse: 100 g}")?.message).toMatch(
      /^10 % of the tracer that passes .* missing from the recovery$/,
    );
    expect(alarm("{at: feed, pulse: 100 g, lasting: 5 min}")?.message).toContain("while it is put in");
    expect(planOf(tank, plain).alarms.map((a) => a.code)).not.toContain("comes-at-once");
  });
});
