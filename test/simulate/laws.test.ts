import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { exact } from "../../src/simulate/exact.js";
import { laplace } from "../../src/simulate/laplace.js";
import { moments } from "../../src/simulate/moments.js";
import { ode } from "../../src/simulate/ode.js";
import { settlingTime, tracerResponse } from "../../src/simulate/tracer.js";
import { peakOf, plantOf } from "./plants.js";
import { randomNetwork } from "./random-network.js";

describe("random networks of stirred tanks, tubes and junctions with recycles, bypasses and exchange", () => {
  test("mean = active volume / flow; engines agree; F rises to the tracer put in; tracer is kept", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 1e6 }), (seed) => {
        const plant = plantOf(randomNetwork(seed));
        const entry = plant.entry.get("feed") as number;
        const all = moments(plant, entry);
        const total = plant.outlets.reduce((sum, o) => sum + all[o.node].share, 0);
        expect(Math.abs(total - 1)).toBeLessThan(1e-12);
        const mean = plant.outlets.reduce(
          (sum, o) => sum + (all[o.node].share > 0 ? all[o.node].share * all[o.node].mean : 0),
          0,
        );
        expect(Math.abs((mean * plant.feeds[0].flow) / plant.volume.active - 1)).toBeLessThan(1e-11);
        const until = Math.min(settlingTime(plant, "feed"), (5 * plant.volume.active) / plant.feeds[0].flow);
        const times = Float64Array.from({ length: 60 }, (_, i) => (until * i) / 59);
        const [a, b] = [exact, ode].map((engine) =>
          tracerResponse(plant, { at: "feed", form: "pulse" }, times, { engine }),
        );
        a.readings.forEach((reading, r) => {
          const peak = Math.max(peakOf(reading.value), 1e-9 / until);
          for (let i = 0; i < times.length; i++) {
            expect(Math.abs(reading.value[i] - b.readings[r].value[i])).toBeLessThan(1e-6 * peak);
            if (i > 0) expect(reading.cumulative[i] - reading.cumulative[i - 1]).toBeGreaterThan(-1e-9);
          }
        });
        expect(a.balance.closure).toBeLessThan(1e-9);
        expect(b.balance.closure).toBeLessThan(1e-9);
      }),
      { numRuns: 25, seed: 20261201 },
    );
  });

  test("a step is the integral of the pulse at every outlet", () => {
    for (const seed of [3, 14, 15, 92]) {
      const plant = plantOf(randomNetwork(seed));
      const span = (2 * plant.volume.active) / plant.feeds[0].flow;
      const times = Float64Array.from({ length: 40 }, (_, i) => (span * i) / 39);
      const pulse = tracerResponse(plant, { at: "feed", form: "pulse" }, times);
      const step = tracerResponse(plant, { at: "feed", form: "step" }, times);
      pulse.readings.forEach((reading, r) => {
        for (let i = 0; i < times.length; i++) expect(step.readings[r].value[i]).toBeCloseTo(reading.cumulative[i], 9);
      });
    }
  });

  test("a sample does not depend on the other times asked", () => {
    const plant = plantOf(randomNetwork(7));
    const span = plant.volume.active / plant.feeds[0].flow;
    const at = (times: number[]) => tracerResponse(plant, { at: "feed", form: "pulse" }, times).readings[0];
    const many = at(Array.from({ length: 101 }, (_, i) => (span * i) / 100));
    const few = at([span / 2, span]);
    expect(few.value[0]).toBeCloseTo(many.value[50], 14);
    expect(few.value[1]).toBeCloseTo(many.value[100], 14);
  });
});

test("a stiff vessel (rates a million apart) is exact too", () => {
  const plant = plantOf(`network: A fast corner
format: 1
feeds: {feed: {flow: 1 L/min, to: a}}
compartments:
  a: {kind: stirred, volume: 0.001 L, to: b}
  b: {kind: stirred, volume: 1000 L, to: out, exchange: {c: 500 L/min}}
  c: {kind: stirred, volume: 0.1 L}
outlets: [out]
`);
  const times = Float64Array.from({ length: 50 }, (_, i) => i * 3600);
  const { readings, balance } = tracerResponse(plant, { at: "feed", form: "pulse" }, times);
  // All but one tank is fast: after the start the curve is that of one tank of the whole volume.
  for (let i = 1; i < times.length; i++) {
    const wanted = Math.exp(-times[i] / 60 / 1000.101) / 1000.101 / 60;
    expect(Math.abs(readings[0].value[i] / wanted - 1)).toBeLessThan(1e-5);
  }
  expect(balance.closure).toBeLessThan(1e-9);
});

test("rates 1e12 apart: pulse and step keep their tracer, and agree with the transfer function", () => {
  const plant = plantOf(`network: A very fast corner and a very slow one
format: 1
feeds: {feed: {flow: 1 m3/s, to: a}}
compartments:
  a: {kind: stirred, volume: 1 m3, to: out, exchange: {quick: 1e6 m3/s, slow: 1e-6 m3/s}}
  quick: {kind: stirred, volume: 1e-6 m3}
  slow: {kind: stirred, volume: 1000 m3}
outlets: [out]
`);
  const times = Float64Array.from({ length: 31 }, (_, i) => i / 10);
  for (const form of ["pulse", "step"] as const) {
    const [a, b] = [exact, laplace].map((engine) => tracerResponse(plant, { at: "feed", form }, times, { engine }));
    expect(a.balance.closure).toBeLessThan(1e-9);
    const peak = peakOf(a.readings[0].value);
    a.readings[0].value.forEach((v, i) => {
      if (i > 0) expect(Math.abs(v - b.readings[0].value[i]) / peak).toBeLessThan(1e-8);
    });
  }
});
