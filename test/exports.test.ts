import { execFileSync } from "node:child_process";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import {
  compile,
  exact,
  integrate,
  laplace,
  moments,
  ode,
  parseChemistry,
  parseDuty,
  parseNetwork,
  steadyState,
  tracerResponse,
  transferFunction,
} from "../src/index.js";

const text = `network: Two tanks and a tube
format: 1
feeds: {feed: {flow: 2 L/min, to: a}}
compartments:
  a: {kind: stirred, volume: 4 L, to: b}
  b: {kind: tubular, volume: 2 L, to: c}
  c: {kind: stirred, volume: 2 L, to: {a: 20 %, out: rest}}
outlets: [out]
`;
const { document, problems } = parseNetwork(text, { path: "two.yaml" });
const plant = document && compile(document).plant;

describe("the library as its contract says", () => {
  test("parseNetwork and compile", () => {
    expect(problems).toEqual([]);
    expect(plant?.volume.active).toBeCloseTo(0.008, 15);
    expect(parseNetwork("nonsense", { path: "x.yaml" }).document).toBeUndefined();
    expect(document && compile(document, { "feed.flow": -1 }).plant).toBeUndefined();
  });

  test("integrate: one state per output time, its end and its costs", () => {
    for (const method of ["auto", "nonstiff", "stiff"] as const) {
      const run = integrate({
        rhs: (t, y, dy) => {
          dy[0] = -2 * y[0] + t;
          dy[1] = y[0];
        },
        start: [1, 0],
        from: 0,
        to: 3,
        method,
        relative: 1e-10,
        absolute: 1e-12,
        outputs: [0, 1, 3],
      });
      expect(run.end).toBe("reached");
      expect([...run.times]).toEqual([0, 1, 3]);
      run.states.forEach((y, i) => {
        const t = run.times[i];
        expect(y[0]).toBeCloseTo(1.25 * Math.exp(-2 * t) + t / 2 - 0.25, 9);
      });
      expect(run.stats.steps).toBeGreaterThan(0);
      expect(run.stats.rhs).toBeGreaterThan(run.stats.steps);
    }
  });

  test("integrate: a blow-up is an end with a time and a reason, and keeps what it has", () => {
    const run = integrate({
      rhs: (_, y, dy) => {
        dy[0] = y[0] * y[0];
      },
      start: [1],
      from: 0,
      to: 2,
      outputs: [0.5, 0.9, 1.5],
    });
    expect(run.end).toMatchObject({ why: "step-too-small" });
    expect(typeof run.end === "object" && Math.abs(run.end.stopped - 1)).toBeLessThan(1e-3);
    expect([...run.times]).toEqual([0.5, 0.9]);
    expect(run.states[1][0]).toBeCloseTo(10, 6);
  });

  test("transferFunction, moments and tracerResponse tell of one vessel", () => {
    if (!plant) throw new Error("no plant");
    const { out } = moments(plant);
    expect(out.share).toBeCloseTo(1, 14);
    expect(out.mean).toBeCloseTo(240, 9);
    const h = 1e-6;
    const slope = (transferFunction(plant, h).out - transferFunction(plant, -h).out) / (2 * h);
    expect(slope).toBeCloseTo(-240, 3);
    expect(transferFunction(plant, [0, 0.01]).out).toHaveLength(2);
    expect(transferFunction(plant, { re: 0, im: 0.1 }).out.im).toBeLessThan(0);
    const times = Array.from({ length: 40 }, (_, i) => 30 * i);
    const [a, b, c] = [exact, laplace, ode].map((engine) =>
      tracerResponse(plant, { at: "feed", form: "pulse" }, times, { engine, at: ["c"] }),
    );
    for (const other of [b, c]) {
      expect(other.readings.map((r) => r.at)).toEqual(["out", "c"]);
      times.forEach((_, i) => {
        expect(other.readings[0].value[i]).toBeCloseTo(a.readings[0].value[i], 9);
      });
      expect(other.balance.closure).toBeLessThan(1e-9);
    }
  });

  test("steadyState: first order is the transfer function at s = k", () => {
    const chemistry = parseChemistry(
      "chemistry: Decay\nformat: 1\nspecies: {A: {}}\nconstants: {k: 0.6 1/min}\nreactions: [{equation: A -> , rate: k * A}]\n".replace(
        "equation: A -> ",
        "makes: {A: -1}",
      ),
      { path: "decay.yaml" },
    );
    const duty = parseDuty(
      "duty: Normal\nformat: 1\nchemistry: decay.yaml\nfeeds: {feed: {A: 1 mol/L}}\ntemperature: 25 degC\nreport: [conversion of A]\n",
      {
        path: "duty.yaml",
        read: () =>
          "chemistry: Decay\nformat: 1\nspecies: {A: {}}\nconstants: {k: 0.6 1/min}\nreactions: [{makes: {A: -1}, rate: k * A}]\n",
      },
    );
    expect([...chemistry.problems, ...duty.problems].map((p) => p.code)).toEqual([]);
    if (!plant || !chemistry.document || !duty.document) throw new Error("not read");
    const state = steadyState(plant, chemistry.document, duty.document);
    expect(state.converged).toBe(true);
    expect(state.outlets[0].concentrations[0] / 1000).toBeCloseTo(transferFunction(plant, 0.01).out, 10);
  });

  test("`import 'backmix'` works inside a clone, and touches neither files nor terminal", () => {
    const code =
      "import('backmix').then((b) => process.stdout.write(['parseNetwork','parseTrial','parseChemistry','parseDuty','parseStudy','compile','tracerResponse','transferFunction','moments','steadyState','leastSquares','fit','integrate'].filter((n) => typeof b[n] !== 'function').join()))";
    const out = execFileSync(process.execPath, ["-e", code], {
      cwd: join(import.meta.dirname, ".."),
      encoding: "utf8",
    });
    expect(out).toBe("");
  });
});
