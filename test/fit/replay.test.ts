import { describe, expect, test } from "vitest";
import { compiler } from "../../src/compile/compile.js";
import type { Settings } from "../../src/compile/plant.js";
import { recordPlant } from "../../src/compile/record.js";
import { type Facts, heldFacts, uncertainConstants } from "../../src/fit/held.js";
import { networkModel } from "../../src/fit/network-model.js";
import { setOnDay } from "../../src/fit/replays.js";
import { settingsOfDay } from "../../src/fit/settings.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { recordTrial } from "../../src/simulate/record-trial.js";
import { Replay } from "../../src/simulate/replay.js";
import { randomNetwork } from "../simulate/random-network.js";
import { networkOf } from "./load.js";
import { error, parametrised, pulse, respond, times, trialWith, vessel } from "./slope-errors.js";

const parametersOf = (network: Network): Record<string, number> => {
  const { plant } = compiler(network).compile({});
  if (!plant) throw new Error("no plant");
  return Object.fromEntries(
    network.names.flatMap((n) => (n.role === "parameter" ? [[n.name, plant.env[n.slot]]] : [])),
  );
};

function replayOf(network: Network, trial: Trial, values: Settings): Replay | undefined {
  const { compile, plan } = compiler(network);
  const { plant } = compile(settingsOfDay(network, trial, values));
  const recorded = plant && recordPlant(network, plan, plant, values, setOnDay(trial));
  const made = typeof recorded === "object" ? recordTrial(recorded, trial) : recorded;
  return typeof made === "object" ? new Replay(made, trial.tracer?.decay ?? 0) : undefined;
}

/**
 * A recording made at the file's values, played at others, beside the way that compiles those: the largest difference of the
 * curve and of its derivatives by the logarithm of each parameter, as a part of the larger of both's peaks.
 */
function apart(network: Network, trial: Trial): number | undefined {
  const values = parametersOf(network);
  const names = Object.keys(values);
  const replay = replayOf(network, trial, values);
  if (!replay) return undefined;
  const wanted = trial.readings.map(() => ({ time: times }));
  const n = names.length;
  const seeds = Float64Array.from({ length: n * n }, (_, k) => (k % (n + 1) === 0 ? 1 : 0));
  let worst = 0;
  for (const by of [0, 0.03, -0.05]) {
    const moved = Object.fromEntries(names.map((name, k) => [name, values[name] * (1 + by * Math.cos(k))]));
    const played = replay.run(
      Float64Array.from(names, (name) => moved[name]),
      wanted,
      seeds,
      n,
    );
    const directions = names.map((name) => ({ names: new Map([[name, 1]]) }));
    // A trial that is new to a model is not recorded.
    const compiled = networkModel(network).slopes?.(trial, { values: moved, shifted: new Set() }, wanted, directions);
    if (!played || !compiled) throw new Error("no vessel");
    wanted.forEach((_, r) => {
      const peak = Math.max(...compiled.curves[r]);
      const compare = (a: Float64Array, b: Float64Array, by: number): void => {
        const size = Math.max(peak, by * Math.max(...b.map(Math.abs)));
        for (let i = 0; i < a.length; i++) worst = Math.max(worst, (by * Math.abs(a[i] - b[i])) / size);
      };
      compare(played.curves[r], compiled.curves[r], 1);
      names.forEach((name, d) => {
        const slope = compiled.slopes[d];
        if (slope) compare(played.slopes[d][r], slope[r], moved[name]);
      });
    });
  }
  return worst;
}

describe("a recording gives what compiling anew gives, curves and derivatives", () => {
  test("random networks", () => {
    let recorded = 0;
    for (let seed = 1; seed <= 40; seed++) {
      const network = networkOf(parametrised(randomNetwork(seed)));
      const off = apart(network, trialWith(pulse));
      if (off === undefined) continue;
      recorded++;
      expect(off, `network ${seed}`).toBeLessThan(1e-9);
    }
    expect(recorded).toBeGreaterThan(15);
  });

  test.each([
    [
      "a chain with pockets",
      "  a: {kind: stirred, repeat: 2, volume: 100 L, stagnant: {volume: 20 L, exchange: 1 L/min}, to: out}",
    ],
    [
      "tubes side by side",
      "  a: {kind: junction, to: {b: 30 %, c: rest}}\n  b: {kind: tubular, volume: 20 L, to: d}\n  c: {kind: tubular, volume: 90 L, to: d}\n  d: {kind: stirred, volume: 50 L, to: out}",
    ],
    [
      "a loop of tanks",
      "  a: {kind: stirred, volume: 100 L, to: b}\n  b: {kind: stirred, volume: 30 L, to: {a: 2 L/min, out: rest}}",
    ],
    ["a bypass alone", "  a: {kind: junction, to: {b: 30 %, out: rest}}\n  b: {kind: tubular, volume: 20 L, to: out}"],
  ])("%s", (_, body) => {
    expect(apart(networkOf(parametrised(vessel(body))), trialWith(pulse))).toBeLessThan(1e-9);
  });

  const tank = parametrised(
    vessel("  a: {kind: tubular, volume: 30 L, to: b}\n  b: {kind: stirred, volume: 100 L, to: out}"),
  );
  test.each([
    ["at once", "{at: feed, pulse: 50 g, start: 0 min}", ""],
    ["a step through a line", "{at: feed, step: 2 g/L, start: 1 min}", "    line: {delay: 0.31 min, lag: 0.4 min}\n"],
    ["a dosing rate for a while", "{at: b, step: 3 g/min, start: 1 min, lasting: 20 min}", ""],
  ])("what is put in: %s", (_, injection, line) => {
    expect(apart(networkOf(tank), trialWith(injection, line))).toBeLessThan(1e-9);
  });

  test("a day with a flow of its own", () => {
    const trial = trialWith(pulse, "", "flows: {feed: 11 L/min}\n");
    expect(apart(networkOf(tank), trial)).toBeLessThan(1e-9);
  });

  test("values made of values, shares of flows, functions", () => {
    const parameters =
      "parameters: {x: {value: 0.3, between: [0, 1]}, q: {value: 2 L/min, between: [0.1 L/min, 5 L/min]}}\nconstants: {y: 2 * x + 0.1 * x ^ 2, v: 100 L * (1 - y / 3)}\n";
    const body =
      "  a: {kind: stirred, volume: v, to: {out: 0.5 * x, b: rest}, exchange: {c: q * exp(x)}}\n  b: {kind: tubular, volume: 20 L * sqrt(x), to: out}\n  c: {kind: stirred, volume: 30 L + v / 10}";
    expect(apart(networkOf(vessel(body, parameters)), trialWith(pulse))).toBeLessThan(1e-9);
  });
});

describe("of a tracer that is lost and held back", () => {
  const network = networkOf(
    vessel(
      "  a: {kind: tubular, volume: v, to: b}\n  b: {kind: stirred, repeat: 2, volume: 60 L, to: out}",
      "parameters: {v: {value: 30 L, between: [1 L, 90 L]}, hold: {value: 1.4, between: [1, 3]}}\n",
    ),
  );
  const values = { v: 0.03, hold: 1.4 };
  const late = [...times.keys()].filter((k) => times[k] > 480);
  test.each([
    ["lost", "{loss: 0.05 1/min}"],
    ["held back in the tube", "{retained: {a: hold}}"],
    ["held back in one tank, and lost", "{retained: {b: hold}, loss: 2 %/min}"],
  ])("%s: the curve of the compiled plant, and derivatives as its differences have them", (_, tracer) => {
    const trial = trialWith(pulse, "", `tracer: ${tracer}\n`);
    const model = networkModel(network);
    model.keep?.([trial]);
    const [played] = model.respond(trial, values, [{ time: times }]) ?? [];
    const compiled = respond(network, trial, values);
    const peak = Math.max(...compiled);
    for (let i = 0; i < times.length; i++) expect(Math.abs(played[i] - compiled[i])).toBeLessThan(1e-10 * peak);
    const directions = Object.keys(values).map((name) => ({ names: new Map([[name, 1]]) }));
    const answer = model.slopes?.(trial, { values, shifted: new Set() }, [{ time: times }], directions);
    for (const [d, [name, value]] of Object.entries(values).entries()) {
      const slope = answer?.slopes[d];
      if (!slope) throw new Error("no derivative");
      const h = 1e-3 * value;
      const moved = (k: number): Float64Array => respond(network, trial, { ...values, [name]: value + k * h });
      expect(error(slope[0], moved, h, late), name).toBeLessThan(1e-7);
    }
  });
});

test("facts that are shifted: derivatives as compiled, whether or not they follow what is fitted", () => {
  const network = networkOf(
    vessel(
      "  a: {kind: tubular, volume: v, to: b}\n  b: {kind: stirred, volume: total - v, to: out, exchange: {c: q}}\n  c: {kind: stirred, volume: 10 L}",
      "constants: {total: 100 L ± 2 L, q: 0.02 * v / 1 min}\nparameters: {v: {value: 30 L, between: [1 L, 90 L]}}\n",
    ),
  );
  const wanted = [{ time: times }];
  const directions = [{ names: new Map([["v", 1]]) }, { names: new Map([["total", 1]]) }];
  for (const shifts of [{ total: 0.102 }, { total: 0.102, q: 1.5e-5 }]) {
    const values = { v: 0.03, ...shifts };
    const at = { values, shifted: new Set(Object.keys(shifts)) };
    const trial = trialWith(pulse);
    const model = networkModel(network);
    model.keep?.([trial]);
    model.respond(trial, values, wanted);
    const kept = model.slopes?.(trial, at, wanted, directions);
    const compiled = networkModel(network).slopes?.(trial, at, wanted, directions);
    directions.forEach((_, d) => {
      const [a, b] = [kept?.slopes[d]?.[0], compiled?.slopes[d]?.[0]];
      if (!a || !b) throw new Error("no derivative");
      const peak = Math.max(...b.map(Math.abs));
      for (let i = 0; i < a.length; i++) expect(Math.abs(a[i] - b[i])).toBeLessThan(1e-9 * peak);
    });
  }
});

test.each([
  ["a pulse through a line", "{at: feed, pulse: 50 g ± 1 %, start: 0 min, lasting: 2 min}"],
  ["a step", "{at: feed, step: 2 g/L ± 2 %, start: 1 min}"],
  ["a dosing rate", "{at: b, step: 3 g/min ± 2 %, start: 1 min, lasting: 20 min}"],
])("facts of the day that are moved: curves and derivatives as compiled: %s", (_, injection) => {
  const network = networkOf(
    vessel(
      "  a: {kind: tubular, volume: v, to: b}\n  b: {kind: stirred, volume: total - v, to: out, exchange: {c: q}}\n  c: {kind: stirred, volume: 10 L}",
      "constants: {total: 100 L}\nparameters: {v: {value: 30 L, between: [1 L, 90 L]}, q: {value: 2 L/min, between: [0.1 L/min, 9 L/min]}}\n",
    ),
  );
  const line = "    line: {delay: 0.31 min ± 0.05 min, lag: 0.4 min ± 0.1 min}\n";
  const trial = trialWith(injection, line, "flows: {feed: 11 L/min ± 1 %}\nwith: {total: 104 L ± 2 L}\n");
  const values = { v: 0.03, q: 3e-5 };
  const env = compiler(network).compile({}).plant?.env ?? [];
  const facts = [
    ...heldFacts(network, [trial], new Set(["v", "q"]), env),
    ...uncertainConstants(network, [trial], env),
  ];
  expect(facts.map((f) => f.says.replace(/ of .*/, "")).sort()).toHaveLength(5);
  const model = networkModel(network);
  model.keep?.([trial]);
  const wanted = [{ time: times }];
  for (const by of [0, 0.7, -1.2]) {
    const moved: Facts = { trials: [trial], values: { ...values } };
    if (by !== 0) for (const [k, f] of facts.entries()) f.move(moved, by * f.sd * Math.cos(k));
    const [day] = moved.trials;
    expect(day.moved?.of).toBe(by === 0 ? undefined : trial);
    const at = { values: moved.values, shifted: new Set<string>() };
    const directions = [...facts.map((f) => f.direction(0)), { names: new Map([["v", 1]]) }].filter(
      (d) => d !== undefined,
    );
    const other = networkModel(network);
    const [curve, compiled] = [model, other].map((m) => m.respond(day, values, wanted)?.[0] ?? new Float64Array(0));
    const [kept, anew] = [model, other].map((m) => m.slopes?.(day, at, wanted, directions)?.slopes);
    const compare = (a: Float64Array, b: Float64Array): void => {
      const peak = Math.max(...b.map(Math.abs));
      expect(a).toHaveLength(b.length);
      for (let i = 0; i < a.length; i++) expect(Math.abs(a[i] - b[i])).toBeLessThan(1e-9 * peak);
    };
    compare(curve, compiled);
    directions.forEach((_, d) => {
      compare(kept?.[d]?.[0] ?? new Float64Array(0), anew?.[d]?.[0] ?? new Float64Array(0));
    });
  }
});

test("a recording is the same to the last digit wherever it was made", () => {
  const network = networkOf(parametrised(randomNetwork(6)));
  const values = parametersOf(network);
  const names = Object.keys(values);
  const seeds = new Float64Array(names.length).fill(1e-3);
  const [here, there] = [1, 0.731].map((by) => {
    const at = Object.fromEntries(names.map((name, k) => [name, values[name] * (k % 2 === 0 ? by : 1)]));
    const trial = trialWith(pulse);
    const played = replayOf(network, trial, at)?.run(
      Float64Array.from(names, (name) => values[name]),
      [{ time: times }],
      seeds,
      1,
    );
    expect(played).toBeDefined();
    return played;
  });
  expect(here).toEqual(there);
});

describe("a recording ends where its structure does", () => {
  const text = vessel(
    "  a: {kind: stirred, volume: 100 L - v, to: b}\n  b: {kind: tubular, volume: v, to: {out: rest, a: q}}",
    "parameters: {v: {value: 30 L, between: [0 L, 200 L]}, q: {value: 0 L/min, between: [0 L/min, 5 L/min]}}\n",
  );
  test("nothing that may vanish is recorded where it is nothing; loops of tubes are not", () => {
    expect(replayOf(networkOf(text), trialWith(pulse), { v: 0.03, q: 0 })).toBeUndefined();
    expect(replayOf(networkOf(text), trialWith(pulse), { v: 0.03, q: 1e-5 })).toBeUndefined();
  });

  test("values that make no vessel, or another one, are not played", () => {
    const other = vessel(
      "  a: {kind: stirred, volume: 100 L - v, to: b}\n  b: {kind: tubular, volume: v, to: out}",
      "parameters: {v: {value: 30 L, between: [0 L, 200 L]}}\nrequires: [v < 80 L]\n",
    );
    const replay = replayOf(networkOf(other), trialWith(pulse), { v: 0.03 });
    const played = (v: number) => replay?.run(Float64Array.of(v), [{ time: times }], new Float64Array(0), 0);
    expect(played(0.05)).toBeDefined();
    for (const v of [-0.01, 0, 0.08, 0.09, 0.1, 0.15, Number.NaN]) expect(played(v), String(v)).toBeUndefined();
  });
});
