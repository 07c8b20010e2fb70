import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { heldFacts } from "../../src/fit/held.js";
import { networkModel } from "../../src/fit/network-model.js";
import { trialResponse } from "../../src/simulate/trial.js";
import { networkOf } from "./load.js";
import { error, errors, parametrised, pulse, respond, smooth, times, trialWith, vessel } from "./slope-errors.js";

const instant = "{at: feed, pulse: 50 g, start: 0 min}";

const mixed = [
  "  a: {kind: junction, to: {b: 60 %, e: 10 %, d: rest}}",
  "  b: {kind: tubular, volume: 30 L, to: c}",
  "  c: {kind: dispersed, volume: 60 L, peclet: 12, to: d}",
  "  d: {kind: stirred, volume: 40 L, to: f}",
  "  e: {kind: laminar, volume: 30 L, to: f}",
  "  f: {kind: cascade, volume: 50 L, tanks: 4.2, to: out}",
].join("\n");

describe("derivatives of curves by transfer functions agree with differences of the sixth order", () => {
  test.each([
    ["dispersed, closed ends", pulse, "  a: {kind: dispersed, volume: 200 L, peclet: 8, to: out}"],
    ["dispersed, nearly a tank", instant, "  a: {kind: dispersed, volume: 200 L, peclet: 0.3, to: out}"],
    ["dispersed, nearly a tube", instant, "  a: {kind: dispersed, volume: 200 L, peclet: 400, to: out}"],
    ["dispersed, open ends", instant, "  a: {kind: dispersed, volume: 200 L, peclet: 8, ends: open, to: out}"],
    ["a cascade", instant, "  a: {kind: cascade, volume: 200 L, tanks: 3.4, to: out}"],
    ["laminar flow", instant, "  a: {kind: laminar, volume: 200 L, to: out}"],
    [
      "a tube past pockets, instantly",
      instant,
      "  a: {kind: tubular, volume: 150 L, stagnant: {volume: 60 L, exchange: 4 L/min}, to: out}",
    ],
    [
      "a tube past pockets",
      pulse,
      "  a: {kind: tubular, volume: 150 L, stagnant: {volume: 60 L, exchange: 4 L/min}, to: out}",
    ],
    [
      "dispersion past pockets",
      instant,
      "  a: {kind: dispersed, volume: 150 L, peclet: 20, stagnant: {volume: 60 L, exchange: 4 L/min}, to: out}",
    ],
    [
      "a cascade past pockets",
      instant,
      "  a: {kind: cascade, volume: 150 L, tanks: 2.5, stagnant: {volume: 60 L, exchange: 4 L/min}, to: out}",
    ],
    ["one after another, with a bypass", instant, mixed],
    [
      "in a loop",
      pulse,
      "  a: {kind: dispersed, volume: 60 L, peclet: 6, to: b}\n  b: {kind: stirred, volume: 40 L, to: {a: 40 %, out: rest}}",
    ],
    [
      "in a loop with a tube",
      instant,
      "  a: {kind: dispersed, volume: 60 L, peclet: 6, to: b}\n  b: {kind: tubular, volume: 40 L, to: {a: 40 %, out: rest}}",
    ],
    [
      "laminar flow in a loop",
      instant,
      "  a: {kind: laminar, volume: 60 L, to: b}\n  b: {kind: stirred, volume: 40 L, to: {a: 4 L/min, out: rest}}",
    ],
    [
      "an exchange and a chain",
      instant,
      "  a: {kind: stirred, volume: 60 L, repeat: 3, backflow: 20 %, to: b}\n  b: {kind: dispersed, volume: 40 L, peclet: 5, to: c}\n  c: {kind: stirred, volume: 50 L, to: out, exchange: {d: 3 L/min}}\n  d: {kind: stirred, volume: 20 L}",
    ],
  ])("%s", (_, injection, body) => {
    const network = networkOf(parametrised(vessel(body)));
    for (const [name, off] of errors(network, trialWith(injection))) expect(off, name).toBeLessThan(1e-6);
  });

  test.each([
    ["a pulse", "{at: feed, pulse: 50 g ± 1 g, start: 0 min}"],
    ["a step", "{at: feed, step: 2 g/L ± 0.1 g/L, start: 1 min, lasting: 20 min}"],
    ["a wash-out", "{at: feed, step: {from: 2 g/L, to: 0.5 g/L ± 0.1 g/L}, start: 1 min}"],
  ])("facts of the day: %s, its flow, its line", (_, injection) => {
    const network = networkOf(vessel(mixed));
    const line = "    line: {delay: 0.31 min ± 0.02 min, lag: 0.4 min ± 0.1 min}\n";
    const trial = trialWith(injection, line, "flows: {feed: 11 L/min ± 0.5 L/min}\n");
    const kept = smooth(network, trial);
    const facts = heldFacts(network, [trial], new Set(), compile(network).plant?.env ?? []);
    expect(facts.length).toBe(4);
    for (const fact of facts) {
      const direction = fact.direction(0);
      const answer =
        direction &&
        networkModel(network).slopes?.(trial, { values: {}, shifted: new Set() }, [{ time: times }], [direction]);
      const h = fact.sd / 50;
      const moved = (k: number): Float64Array => {
        const to = { trials: [trial], values: {} };
        fact.move(to, k * h);
        return respond(network, to.trials[0], to.values);
      };
      const [slope] = answer?.slopes[0] ?? [new Float64Array(0)];
      expect(slope.length).toBe(times.length);
      expect(error(slope, moved, h, kept), fact.says).toBeLessThan(1e-6);
    }
  });

  test.each([
    ["cells and tubes", "  a: {kind: tubular, volume: 30 L, to: b}\n  b: {kind: stirred, volume: 40 L, to: out}"],
    [
      "other bodies",
      "  a: {kind: tubular, volume: 30 L, to: b}\n  b: {kind: cascade, volume: 40 L, tanks: 3, to: out}",
    ],
  ])("a mix of places and a tracer that decays, through %s: curve and derivatives", (_, body) => {
    const network = networkOf(parametrised(vessel(body)));
    const trial = trialWith(pulse, "", "tracer: {half-life: 20 min}\n", "{a: 40 %, out: rest}");
    const { plant } = compile(network);
    if (!plant) throw new Error("no plant");
    const [alone] = trialResponse(plant, trial, [{ time: times }]);
    const peak = Math.max(...alone);
    respond(network, trial, {}).forEach((c, i) => {
      expect(Math.abs(c - alone[i])).toBeLessThan(1e-9 * peak);
    });
    for (const [name, off] of errors(network, trial)) expect(off, name).toBeLessThan(1e-6);
  });

  test("tubes of one delay that part: what is dispersed behind them has a derivative, what is not has none", () => {
    const parameters = "parameters: {v: {value: 50 L, between: [1 L, 100 L]}}\n";
    const first = "  a: {kind: dispersed, volume: 20 L, peclet: 3, to: b}\n";
    const tubes = "{kind: tubular, volume: v, to: e}\n  d: {kind: tubular, volume: 50 L, to: e}";
    const last = "  e: {kind: dispersed, volume: 40 L, peclet: 6, to: out}";
    const dispersed = `${first}  b: {kind: junction, to: {c: 50 %, d: rest}}\n  c: ${tubes}\n${last}`;
    for (const [name, off] of errors(networkOf(vessel(dispersed, parameters)), trialWith(instant)))
      expect(off, name).toBeLessThan(1e-6);
    const network = networkOf(
      vessel(`  a: {kind: junction, to: {c: 50 %, d: rest}}\n  c: ${tubes}\n${last}`, parameters),
    );
    const at = { values: {}, shifted: new Set<string>() };
    const direction = { names: new Map([["v", 1]]) };
    const answer = networkModel(network).slopes?.(trialWith(instant), at, [{ time: times }], [direction]);
    expect(answer?.slopes).toEqual([undefined]);
  });
});
