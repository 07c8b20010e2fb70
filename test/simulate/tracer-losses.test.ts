import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Tracer, Trial } from "../../src/model/trial.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { exact } from "../../src/simulate/exact.js";
import { laplace } from "../../src/simulate/laplace.js";
import { moments } from "../../src/simulate/moments.js";
import { tracerPlant } from "../../src/simulate/tracer-plant.js";
import { trialResponse } from "../../src/simulate/trial.js";

const looped = `network: A loop with a tube, a quiet corner and a bypass
format: 1
feeds: {feed: {flow: 10 L/min, to: {leg: rest, product: 10 %}}}
compartments:
  leg: {kind: tubular, volume: 30 L, to: bulk}
  bulk: {kind: stirred, volume: 60 L, to: {back: 40 %, product: rest}, exchange: {corner: 2 L/min}}
  corner: {kind: stirred, volume: 20 L}
  back: {kind: tubular, volume: 15 L, to: bulk}
outlets: [product]
`;

const bodies = `network: Bodies that only a transfer function knows
format: 1
feeds: {feed: {flow: 10 L/min, to: round}}
compartments:
  round: {kind: laminar, volume: 20 L, to: bed}
  bed: {kind: dispersed, volume: 50 L, peclet: 8, ends: closed, stagnant: {volume: 10 L, exchange: 1 L/min}, to: row}
  row: {kind: cascade, volume: 30 L, tanks: 2.5, to: product}
outlets: [product]
`;

const plantOf = (text: string) => {
  const { document, problems } = parseNetwork(text);
  if (!document) throw new Error(problems.map((p) => p.message).join());
  const { plant } = compile(document);
  if (!plant) throw new Error("no plant");
  return plant;
};

const trialOf = (injection: string, more = ""): Trial => {
  const text = `trial: Made for a test\nformat: 1\ninjection: ${injection}\nreadings: [{at: product}]\n${more}`;
  const { document, problems } = parseTrial(text);
  if (!document) throw new Error(problems.map((p) => p.message).join());
  return document;
};

const minutes = (n: number, step: number) => Float64Array.from({ length: n }, (_, i) => 60 * step * (i + 0.37));
const peak = (y: Float64Array) => y.reduce((m, v) => Math.max(m, Math.abs(v)), 0);

describe.each([
  ["cells and tubes", looped],
  ["blocks", bodies],
])("a loss of first order in %s", (_, text) => {
  const plant = plantOf(text);
  const time = minutes(60, 0.9);

  // All paths of tracer that leaves at t have taken t: each has lost exp(-loss t).
  test("an instant pulse is thinned by exp(-loss t), whatever way it took", () => {
    const plain = trialResponse(plant, trialOf("{at: feed, pulse: 10 g}"), [{ time }])[0];
    const lost = trialResponse(plant, trialOf("{at: feed, pulse: 10 g}", "tracer: {loss: 0.05 1/min}"), [{ time }])[0];
    for (const [i, t] of time.entries())
      expect(Math.abs(lost[i] - plain[i] * Math.exp((-0.05 * t) / 60))).toBeLessThan(1e-8 * peak(plain));
  });

  test("what is left of a long step is the transfer function at s = loss", () => {
    const far = Float64Array.of(60 * 3000);
    const [lost] = trialResponse(plant, trialOf("{at: feed, step: 1 g/L}", "tracer: {loss: 0.02 1/min}"), [
      { time: far },
    ]);
    const share = moments(tracerPlant(plant, { loss: 0.02 / 60 }), plant.entry.get("feed") as number)[
      plant.exit.get("product") as number
    ].share;
    expect(lost[0]).toBeCloseTo(share, 7);
  });

  test("half-life: amounts are those at the start of their injection, also of one that lasts", () => {
    const give = "{at: feed, pulse: 10 g, start: 3 min, lasting: 8 min}";
    const plain = trialResponse(plant, trialOf(give), [{ time }])[0];
    const decayed = trialResponse(plant, trialOf(give, "tracer: {half-life: 20 min}"), [{ time }])[0];
    for (const [i, t] of time.entries())
      expect(Math.abs(decayed[i] - plain[i] * 2 ** (-(t / 60 - 3) / 20))).toBeLessThan(1e-9 * peak(plain));
  });

  test("retention in every body is a clock that goes slower", () => {
    const all = plant.network.compartments.map((c) => `${c.name}: 1.6`).join(", ");
    const slow = trialResponse(plant, trialOf("{at: feed, pulse: 10 g}", `tracer: {retained: {${all}}}`), [
      { time },
    ])[0];
    const plain = trialResponse(plant, trialOf("{at: feed, pulse: 10 g}"), [{ time: time.map((t) => t / 1.6) }])[0];
    for (const i of time.keys()) expect(Math.abs(slow[i] - plain[i] / 1.6)).toBeLessThan(1e-8 * peak(plain));
  });

  test("the mean is the retained volume over the flow", () => {
    const name = plant.network.compartments[0].name;
    const tracer: Tracer = { retained: [{ body: name, at: plant.network.at, factor: 2.5 }] };
    const held = tracerPlant(plant, tracer);
    const [feed, product] = [plant.entry.get("feed") as number, plant.exit.get("product") as number];
    const [before, after] = [moments(plant, feed)[product].mean, moments(held, feed)[product].mean];
    const volume = plant.nodes.filter((n) => n.name === name).reduce((sum, n) => sum + n.volume, 0);
    expect((after - before) * plant.feeds[0].flow).toBeCloseTo(1.5 * volume, 12);
  });
});

test("both engines agree where tracer is lost and held back", () => {
  const plant = plantOf(looped);
  const time = minutes(60, 0.9);
  const trial = trialOf(
    "{at: feed, step: 1 g/L, start: 2 min, lasting: 15 min}",
    "tracer: {loss: 0.03 1/min, half-life: 1 h, retained: {corner: 3, leg: 1.2}}",
  );
  const [a] = trialResponse(plant, trial, [{ time }], exact);
  const [b] = trialResponse(plant, trial, [{ time }], laplace);
  for (const i of time.keys()) expect(Math.abs(a[i] - b[i])).toBeLessThan(1e-7 * peak(a));
});

test("a mix reads what its places read, by their shares", () => {
  const plant = plantOf(looped);
  const time = minutes(40, 1);
  const read = (at: string): Float64Array => {
    const text = `trial: T\nformat: 1\ninjection: {at: feed, pulse: 10 g}\nreadings: [{at: ${at}}]\n`;
    return trialResponse(plant, parseTrial(text).document as Trial, [{ time }])[0];
  };
  const [mix, bulk, corner] = ["{bulk: 60 %, corner: rest}", "bulk", "corner"].map(read);
  for (const i of time.keys()) expect(mix[i]).toBeCloseTo(0.6 * bulk[i] + 0.4 * corner[i], 14);
});

test("a measured inlet seen with a lag gives what the inlet without it gives", () => {
  const plant = plantOf(looped);
  const lag = 2; // min
  const t = Array.from({ length: 4001 }, (_, i) => i * 0.01);
  // A ramp up and down, and what a first-order detector makes of it.
  const x = t.map((u) => Math.max(0, Math.min(u, 10 - u) / 5));
  const y: number[] = [0];
  for (let i = 1; i < t.length; i++) {
    const [h, a, b] = [t[i] - t[i - 1], x[i - 1], x[i]];
    const e = Math.exp(-h / lag);
    const slope = (b - a) / h;
    y.push(y[i - 1] * e + (a - slope * lag) * (1 - e) + slope * h);
  }
  const give = (values: readonly number[], line: string): Trial => {
    const csv = `t,c\n${t.map((u, i) => `${u},${values[i]}`).join("\n")}`;
    const signal = `{file: in.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}${line}}`;
    const text = `trial: T\nformat: 1\ninjection: {at: feed, signal: ${signal}}\nreadings: [{at: product}]\n`;
    return parseTrial(text, { path: "t.yaml", read: () => csv }).document as Trial;
  };
  const time = minutes(40, 1);
  const [plain] = trialResponse(plant, give(x, ""), [{ time }]);
  const [seen] = trialResponse(plant, give(y, ", line: {lag: 2 min}"), [{ time }]);
  for (const i of time.keys()) expect(Math.abs(seen[i] - plain[i])).toBeLessThan(3e-3 * peak(plain));
});
