import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Settings } from "../../src/compile/plant.js";
import { sevenPoint } from "../../src/compile/value-slopes.js";
import { heldFacts } from "../../src/fit/held.js";
import { networkModel } from "../../src/fit/network-model.js";
import { settingsOfDay } from "../../src/fit/settings.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { trace } from "../../src/simulate/trace.js";
import { randomNetwork } from "../simulate/random-network.js";
import { networkOf, trialOf } from "./load.js";

const times = Float64Array.from({ length: 60 }, (_, i) => 60 * (0.37 + 1.31 * i));

/** Quantities of a text as parameters `p0`, `p1`, ... where they stand. */
function parametrised(text: string): string {
  const values: string[] = [];
  const body = text.replace(/(\d+(?:\.\d+)? (?:L\/min|L|%))/g, (written) => `p${values.push(written) - 1}`);
  const parameters = values.map(
    (v, i) => `  p${i}: {value: ${v}, between: [0.001 ${v.split(" ")[1]}, 1000 ${v.split(" ")[1]}]}`,
  );
  return body.replace("feeds:", ["parameters:", ...parameters, "feeds:"].join("\n"));
}

function trialWith(injection: string, more = "", flows = ""): Trial {
  const csv = `t,c\n${[...times].map((t) => `${t / 60},1`).join("\n")}\n`;
  const text = `trial: t\nformat: 1\n${flows}injection: ${injection}\nreadings:\n  - at: out\n    file: x.csv\n    time: {column: t, unit: min}\n    value: {column: c, unit: g/L}\n${more}`;
  return trialOf(text, () => csv);
}

/** Times at which no front passes within a hundredth of the delays: there the curve has a derivative. */
function smooth(network: Network, trial: Trial): number[] {
  const { plant } = compile(network, settingsOfDay(network, trial, {}));
  if (!plant) throw new Error("no plant");
  const line = trial.readings[0].line.delay?.of([]) ?? 0;
  const fronts = trial.injections.flatMap((i) => {
    const delays = trace(plant, plant.entry.get(i.at) as number, 1e5).passagesAt(plant.exit.get("out") as number);
    return delays.flatMap(({ delay }) =>
      [0, i.lasting].map((w) => ({ at: i.start + w + delay + line, delay: delay + line })),
    );
  });
  return [...times.keys()].filter((k) => fronts.every((f) => Math.abs(times[k] - f.at) > 0.02 * f.delay));
}

const respond = (network: Network, trial: Trial, values: Settings): Float64Array => {
  const answer = networkModel(network).respond(trial, values, [{ time: times }]);
  if (!answer) throw new Error("no vessel");
  return answer[0];
};

/** The largest difference from seven-point differences, as a part of the column's largest entry; rounding alone is no column. */
function error(slope: Float64Array, at: (k: number) => Float64Array, h: number, kept: readonly number[]): number {
  const curves = new Map([-3, -2, -1, 1, 2, 3].map((k) => [k, at(k)]));
  const differences = kept.map((i) => sevenPoint((k) => (curves.get(k) as Float64Array)[i], h));
  const rounding = (1e-13 / h) * Math.max(...(curves.get(1) as Float64Array));
  const size = Math.max(1e6 * rounding, ...differences.map(Math.abs));
  return Math.max(...kept.map((i, n) => Math.abs(slope[i] - differences[n]))) / size;
}

/** Every parameter of a network by its exact derivative and by differences. */
function errors(network: Network, trial: Trial): [string, number][] {
  const names = network.names.filter((n) => n.role === "parameter").map((n) => n.name);
  const { plant } = compile(network);
  if (!plant) throw new Error("no plant");
  const env = plant.env;
  const values = Object.fromEntries(
    network.names.flatMap((n) => (n.role === "parameter" ? [[n.name, env[n.slot]]] : [])),
  );
  const kept = smooth(network, trial);
  const at = { values, shifted: new Set<string>() };
  const directions = names.map((name) => ({ names: new Map([[name, 1]]) }));
  const answer = networkModel(network).slopes?.(trial, at, [{ time: times }], directions);
  return names.map((name, p) => {
    const slope = answer?.slopes[p];
    if (!slope) return [name, Number.NaN];
    const h = 1e-3 * Math.abs(values[name]);
    return [
      name,
      error(slope[0], (k) => respond(network, trial, { ...values, [name]: values[name] + k * h }), h, kept),
    ];
  });
}

const pulse = "{at: feed, pulse: 50 g, start: 0 min, lasting: 2 min}";

describe("derivatives of a tracer curve agree with differences of the sixth order", () => {
  test.each([1, 2, 3, 4, 5, 6, 7, 8])("random network %i, every quantity", (seed) => {
    const network = networkOf(parametrised(randomNetwork(seed)));
    for (const [name, off] of errors(network, trialWith(pulse))) expect(off, name).toBeLessThan(1e-7);
  });

  const vessel = (body: string, parameters = "") =>
    `network: n\nformat: 1\n${parameters}feeds:\n  feed: {flow: 10 L/min, to: a}\ncompartments:\n${body}\noutlets: [out]\n`;

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
