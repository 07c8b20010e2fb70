import { describe, expect, test } from "vitest";
import type { Fit } from "../../src/fit/result.js";
import type { Network } from "../../src/model/network.js";
import { networkOf, trialOf } from "./load.js";
import { every, fitted, noisy, parameterOf, synthetic } from "./synthetic.js";

const corner = (flow = "10 L/min"): Network =>
  networkOf(`network: Tank with a quiet corner
format: 1
parameters:
  main: {value: 60 L, between: [10 L, 300 L]}
  quiet: {value: 60 L, between: [5 L, 300 L]}
  renewal: {value: 3 L/min, between: [0.1 L/min, 30 L/min], spacing: log}
feeds: {feed: {flow: ${flow}, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: main, to: out, exchange: {pocket: renewal}}
  pocket: {kind: stirred, volume: quiet}
outlets: [out]
`);
const truth = { main: 0.08, quiet: 0.04, renewal: 1.5e-3 / 60 };
const network = corner();
const names = ["main", "quiet", "renewal"] as const;
const trial = (title: string, flow: number, seed: number, count = 60, step = 0.75) =>
  synthetic(network, truth, {
    title,
    injection: "{at: feed, pulse: 50 g, lasting: 0.5 min}",
    flows: `{feed: ${flow} L/min}`,
    at: "out",
    times: every(step, count),
    noise: noisy(seed, 0.004),
  });

/** Parameters of two fits, apart by a share of a standard error. */
function apart(a: Fit, b: Fit): number {
  return Math.max(
    ...names.map((name) => {
      const [p, q] = [parameterOf(a, name), parameterOf(b, name)];
      return Math.abs(p.value - q.value) / (p.standardError ?? NaN);
    }),
  );
}

describe("laws of the fit", () => {
  const [one, two] = [trial("normal", 10, 1), trial("half", 5, 2)];
  const few = { starts: 4 };
  const both = fitted(network, [one, two], few);

  test("the order of trials does not matter", () => {
    const other = fitted(network, [two, one], few);
    expect(apart(both, other)).toBeLessThan(1e-5);
    expect(other.residualSumOfSquares / both.residualSumOfSquares).toBeCloseTo(1, 12);
    expect(other.aicc).toBeCloseTo(both.aicc, 8);
  });

  test("the order of points does not matter, nor points left out", () => {
    const rows = Array.from(one.readings[0].series?.time ?? [], (t, i) => [t / 60, one.readings[0].series?.value[i]]);
    const text = (extra: string): string => `trial: normal
format: 1
injection: {at: feed, pulse: 50 g, lasting: 0.5 min}
readings:
  - {at: out, file: d.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}${extra}}
`;
    const csv = (list: (number | undefined)[][]): string => `t,c\n${list.map((r) => r.join(",")).join("\n")}\n`;
    const spoiled = [...rows, [50, 9], [51, 9]];
    const cut = fitted(
      network,
      [trialOf(text(", leave-out: [{from: 49 min, to: 52 min, because: air}]"), () => csv(spoiled))],
      few,
    );
    const whole = fitted(network, [trialOf(text(""), () => csv(rows))], few);
    expect(cut.observations).toBe(rows.length);
    expect(apart(cut, whole)).toBeLessThan(1e-6);
  });

  test("units of the files do not matter", () => {
    const other = networkOf(`network: Tank with a quiet corner
format: 1
parameters:
  main: {value: 0.06 m3, between: [0.01 m3, 0.3 m3]}
  quiet: {value: 6e4 mL, between: [5000 mL, 3e5 mL]}
  renewal: {value: 0.18 m3/h, between: [0.006 m3/h, 1.8 m3/h], spacing: log}
feeds: {feed: {flow: 0.6 m3/h, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: main, to: out, exchange: {pocket: renewal}}
  pocket: {kind: stirred, volume: quiet}
outlets: [out]
`);
    const series = one.readings[0].series;
    const csv = `t,c\n${Array.from(series?.time ?? [], (t, i) => `${t},${((series?.value[i] ?? 0) * 1000).toPrecision(17)}`).join("\n")}\n`;
    const inOther = trialOf(
      `trial: normal
format: 1
injection: {at: feed, pulse: 0.05 kg, lasting: 30 s}
readings: [{at: out, file: d.csv, time: {column: t, unit: s}, value: {column: c, unit: mg/L}}]
`,
      () => csv,
    );
    const [a, b] = [fitted(network, [one], few), fitted(other, [inOther], few)];
    expect(apart(a, b)).toBeLessThan(1e-5);
    expect(b.residualSumOfSquares / a.residualSumOfSquares / 1e6).toBeCloseTo(1, 9);
    for (const name of names) {
      const [p, q] = [parameterOf(a, name), parameterOf(b, name)];
      expect((q.standardError ?? NaN) / (p.standardError ?? NaN)).toBeCloseTo(1, 6);
    }
  });

  test("the seed does not matter where the optimum is one", () => {
    expect(apart(both, fitted(network, [one, two], { ...few, seed: 77 }))).toBeLessThan(1e-6);
  });

  test("two flows tell an exchange that follows the flow from one that a stirrer sets; one flow cannot", () => {
    const mixed = networkOf(`network: Tank with a quiet corner, exchange set by both
format: 1
parameters:
  stirred: {value: 1 L/min, between: [0 L/min, 10 L/min]}
  carried: {value: 0.2, between: [0, 2]}
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments:
  bulk:
    kind: stirred
    volume: 80 L
    to: out
    exchange: {pocket: stirred + carried * feed.flow}
  pocket: {kind: stirred, volume: 40 L}
outlets: [out]
`);
    const at = (title: string, flow: number, seed: number) =>
      synthetic(
        mixed,
        { stirred: 1e-3 / 60, carried: 0.05 },
        {
          title,
          injection: "{at: feed, pulse: 50 g, lasting: 0.5 min}",
          flows: `{feed: ${flow} L/min}`,
          at: "out",
          times: every(0.75, 60),
          noise: noisy(seed, 0.001),
        },
      );
    const oneFlow = fitted(mixed, [at("a", 10, 3), at("b", 10, 4)]);
    expect(oneFlow.findings.map((f) => f.code)).toContain("cannot-tell");
    expect(oneFlow.parameters.map((p) => p.standardError)).toEqual([undefined, undefined]);
    const twoFlows = fitted(mixed, [at("a", 10, 3), at("b", 30, 4)]);
    expect(twoFlows.findings.map((f) => f.code)).not.toContain("cannot-tell");
    const [stirred, carried] = ["stirred", "carried"].map((name) => parameterOf(twoFlows, name));
    expect(Math.abs(stirred.value - 1e-3 / 60) / (stirred.standardError ?? NaN)).toBeLessThan(3);
    expect(Math.abs(carried.value - 0.05) / (carried.standardError ?? NaN)).toBeLessThan(3);
  });

  test("the truth lies inside the intervals", () => {
    const inside = Array.from({ length: 8 }, (_, k) => {
      const found = fitted(network, [trial("n", 10, 200 + k), trial("h", 4, 300 + k)], { starts: 0 });
      return names.map((name) => {
        const i = parameterOf(found, name).interval95;
        return i !== undefined && i[0] <= truth[name] && truth[name] <= i[1];
      });
    }).flat();
    // Binomial(24, 0.95): 19 or fewer has probability 0.6 %.
    expect(inside.filter(Boolean).length).toBeGreaterThan(19);
  });

  test("a long log: the search on part of it, the answer from all of it", () => {
    const dense = (count: number) => fitted(network, [trial("dense", 10, 8, count, 45 / count)], { starts: 2 });
    const [some, all] = [dense(600), dense(5400)];
    expect(all.observations).toBe(5400);
    for (const name of names) {
      const p = parameterOf(all, name);
      expect(Math.abs(p.value - truth[name]) / (p.standardError ?? NaN), name).toBeLessThan(4);
      const ratio = (parameterOf(some, name).standardError ?? NaN) / (p.standardError ?? NaN);
      expect(ratio / 3, name).toBeGreaterThan(0.7);
      expect(ratio / 3, name).toBeLessThan(1.4);
    }
  });
});
