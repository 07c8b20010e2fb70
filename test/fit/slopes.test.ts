import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { heldFacts } from "../../src/fit/held.js";
import { networkModel } from "../../src/fit/network-model.js";
import { randomNetwork } from "../simulate/random-network.js";
import { networkOf, trialOf } from "./load.js";
import { error, errors, parametrised, pulse, respond, smooth, times, trialWith, vessel } from "./slope-errors.js";

describe("derivatives of a tracer curve agree with differences of the sixth order", () => {
  test.each([1, 2, 3, 4, 5, 6, 7, 8])("random network %i, every quantity", (seed) => {
    const network = networkOf(parametrised(randomNetwork(seed)));
    for (const [name, off] of errors(network, trialWith(pulse))) expect(off, name).toBeLessThan(1e-7);
  });

  test.each([
    ["a chain", "  a: {kind: stirred, repeat: 5, volume: 100 L, to: out}"],
    ["a chain with backflow", "  a: {kind: stirred, repeat: 4, volume: 100 L, backflow: 30 %, to: out}"],
    [
      "a chain entered past its first",
      "  a: {kind: junction, to: {b: 70 %, b.3: rest}}\n  b: {kind: stirred, repeat: 4, volume: 100 L, backflow: 30 %, to: out}",
    ],
    ["pockets", "  a: {kind: stirred, repeat: 2, volume: 100 L, stagnant: {volume: 20 L, exchange: 1 L/min}, to: out}"],
    [
      "many states",
      "  a: {kind: stirred, repeat: 30, volume: 200 L, to: b}\n  b: {kind: tubular, volume: 80 L, to: out}",
    ],
    [
      "a tube in a loop",
      "  a: {kind: tubular, volume: 30 L, to: {b: 60 %, out: rest}}\n  b: {kind: stirred, volume: 40 L, to: a}",
    ],
    [
      "tubes alone",
      "  a: {kind: junction, to: {b: 30 %, c: rest}}\n  b: {kind: tubular, volume: 20 L, to: out}\n  c: {kind: tubular, volume: 90 L, to: out}",
    ],
    [
      "junctions in a circle",
      "  a: {kind: junction, to: {b: 60 %, c: rest}}\n  b: {kind: junction, to: {a: 30 %, c: rest}}\n  c: {kind: stirred, volume: 40 L, to: out}",
    ],
  ])("%s", (_, body) => {
    const network = networkOf(parametrised(vessel(body)));
    for (const [name, off] of errors(network, trialWith(pulse))) expect(off, name).toBeLessThan(1e-7);
  });

  test("values made of values, shares of flows, functions", () => {
    const parameters =
      "parameters: {x: {value: 0.3, between: [0, 1]}, q: {value: 2 L/min, between: [0.1 L/min, 5 L/min]}}\nconstants: {y: 2 * x + 0.1 * x ^ 2, v: 100 L * (1 - y / 3)}\n";
    const body =
      "  a: {kind: stirred, volume: v, to: {out: 0.5 * x, b: rest}, exchange: {c: q * exp(x)}}\n  b: {kind: tubular, volume: 20 L * sqrt(x), to: {a: 0.1 * feed.flow, out: rest}}\n  c: {kind: stirred, volume: 30 L + v / 10}";
    const network = networkOf(vessel(body, parameters));
    for (const [name, off] of errors(network, trialWith(pulse))) expect(off, name).toBeLessThan(1e-7);
  });

  const held = vessel(
    "  a: {kind: stirred, volume: 100 L, to: b}\n  b: {kind: tubular, volume: 30 L, to: {a: 2 L/min, out: rest}}",
  );
  test.each([
    ["a pulse", "{at: feed, pulse: 50 g ± 1 g, start: 0 min}"],
    ["a long pulse", "{at: feed, pulse: 50 g ± 1 g, start: 0 min, lasting: 3 min}"],
    ["a step", "{at: feed, step: 2 g/L ± 0.1 g/L, start: 1 min, lasting: 20 min}"],
    ["a wash-out", "{at: feed, step: {from: 2 g/L, to: 0.5 g/L ± 0.1 g/L}, start: 1 min}"],
    ["a dosing rate", "{at: a, step: 3 g/min ± 0.1 g/min, start: 1 min, lasting: 20 min}"],
  ])("facts of the day: %s, its flow, its line", (_, injection) => {
    const network = networkOf(held);
    const line = "    line: {delay: 0.31 min ± 0.02 min, lag: 0.4 min ± 0.1 min}\n";
    const trial = trialWith(injection, line, "flows: {feed: 11 L/min ± 0.5 L/min}\n");
    const env = compile(network).plant?.env ?? [];
    const kept = smooth(network, trial);
    const model = networkModel(network);
    const facts = heldFacts(network, [trial], new Set(), env);
    expect(facts.length).toBe(4);
    for (const fact of facts) {
      const direction = fact.direction(0);
      const answer =
        direction && model.slopes?.(trial, { values: {}, shifted: new Set() }, [{ time: times }], [direction]);
      const h = fact.sd / 50;
      const moved = (k: number): Float64Array => {
        const to = { trials: [trial], values: {} };
        fact.move(to, k * h);
        return respond(network, to.trials[0], to.values);
      };
      const [slope] = answer?.slopes[0] ?? [new Float64Array(0)];
      expect(error(slope, moved, h, kept), fact.says).toBeLessThan(1e-7);
    }
  });

  test("a measured inlet through tubes: its slope shifts with them", () => {
    const inlet = "t,c\n0,0\n2,1\n5,0.4\n9,0\n";
    const data = `t,c\n${[...times].map((t) => `${t / 60},1`).join("\n")}\n`;
    const text =
      "trial: t\nformat: 1\ninjection: {at: feed, signal: {file: inlet.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}}\nreadings:\n  - at: out\n    file: x.csv\n    time: {column: t, unit: min}\n    value: {column: c, unit: g/L}\n";
    const trial = trialOf(text, (path) => (path.endsWith("inlet.csv") ? inlet : data));
    const network = networkOf(
      parametrised(
        vessel(
          "  a: {kind: tubular, volume: 33 L, to: {b: 40 %, out: rest}}\n  b: {kind: stirred, volume: 70 L, to: out}",
        ),
      ),
    );
    for (const [name, off] of errors(network, trial)) expect(off, name).toBeLessThan(1e-7);
  });
});

test("another unit of a parameter scales its derivative and nothing else", () => {
  fc.assert(
    fc.property(fc.integer({ min: 13, max: 1000 }), fc.double({ min: 0.01, max: 100, noNaN: true }), (seed, by) => {
      const network = networkOf(parametrised(randomNetwork(seed)));
      const at = { values: {}, shifted: new Set<string>() };
      const model = networkModel(network);
      const ask = (x: number) =>
        model.slopes?.(trialWith(pulse), at, [{ time: times }], [{ names: new Map([["p1", x]]) }]);
      const [one, other] = [ask(1)?.slopes[0]?.[0], ask(by)?.slopes[0]?.[0]];
      one?.forEach((d, i) => {
        expect(other?.[i] ?? Number.NaN).toBeCloseTo(by * d, 9 - Math.ceil(Math.log10(Math.abs(by * d) + 1e-9)));
      });
    }),
    { numRuns: 10 },
  );
});
