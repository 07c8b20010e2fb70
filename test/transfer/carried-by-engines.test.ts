import { describe, expect, test } from "vitest";
import { steadyState } from "../../src/reaction/steady.js";
import { exact } from "../../src/simulate/exact.js";
import { ode } from "../../src/simulate/ode.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { transferFunction } from "../../src/transfer/transfer-function.js";
import { decay, dutyOf } from "../reaction/make.js";
import { peakOf, plantOf } from "../simulate/plants.js";
import { vessel } from "./vessel.js";

/** Backflow and pockets as a key, and the same written out body by body. */
const short = plantOf(
  vessel(
    "  a: {kind: stirred, repeat: 3, backflow: 60 %, volume: 6 L, stagnant: {volume: 3 L, exchange: 0.9 L/min}, to: {a: 1 L/min, out: rest}}",
  ),
);
const long = plantOf(
  vessel(
    `  a1: {kind: stirred, volume: 2 L, to: a2, exchange: {p1: 0.3 L/min, a2: 1.2 L/min}}
  a2: {kind: stirred, volume: 2 L, to: a3, exchange: {p2: 0.3 L/min, a3: 1.2 L/min}}
  a3: {kind: stirred, volume: 2 L, to: {a1: 1 L/min, out: rest}, exchange: {p3: 0.3 L/min}}
  p1: {kind: stirred, volume: 1 L}
  p2: {kind: stirred, volume: 1 L}
  p3: {kind: stirred, volume: 1 L}`,
    "a1",
  ),
);

describe.each([exact, ode])("$name engine", (engine) => {
  test("backflow and pockets written as keys are those written out", () => {
    const times = Float64Array.from({ length: 60 }, (_, i) => 20 * i);
    const [a, b] = [short, long].map((plant) => tracerResponse(plant, { at: "in", form: "pulse" }, times, { engine }));
    const peak = peakOf(b.readings[0].value);
    times.forEach((_, i) => {
      expect(Math.abs(a.readings[0].value[i] - b.readings[0].value[i])).toBeLessThan(1e-8 * peak);
    });
    expect(a.balance.closure).toBeLessThan(1e-8);
    expect(a.readings[0].moments.mean / 60).toBeCloseTo(9, 11);
  });
});

test.each([0.001, 0.03, 2])("a first-order reaction of k = %f leaves what the transfer function says", (k) => {
  const chemistry = decay(k, 1);
  const { outlets, converged } = steadyState(short, chemistry, dutyOf(chemistry, { in: { A: 1 } }));
  expect(converged).toBe(true);
  expect(Math.abs(outlets[0].concentrations[0] - transferFunction(short, k).out)).toBeLessThan(1e-10);
});
