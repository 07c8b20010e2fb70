import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { exact } from "../../src/simulate/exact.js";
import { laplace } from "../../src/simulate/laplace.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { randomBlocks } from "../transfer/random-blocks.js";
import { vessel } from "../transfer/vessel.js";
import { closedFormPlants } from "./block-vessels.js";
import { peakOf, plantOf } from "./plants.js";
import { randomNetwork } from "./random-network.js";

// 30-digit closed forms; formulas and sources in shared/reference/closed-forms/models.json
const rows = readFileSync("shared/reference/closed-forms/curves-moments-conversions.csv", "utf8")
  .split("\n")
  .slice(1)
  .map((line) => line.split(","))
  .map(([name, quantity, argument, value]) => ({ name, quantity, argument: Number(argument), value: Number(value) }));
const minute = 60;

test("every case has its plant", () => {
  const cases: { case: string }[] = JSON.parse(readFileSync("shared/reference/closed-forms/cases.json", "utf8"));
  expect(Object.keys(closedFormPlants).sort()).toEqual(cases.map((c) => c.case).sort());
});

describe.each(Object.keys(closedFormPlants))("%s", (name) => {
  test("E and F are those of the closed form", () => {
    const points = rows.filter((r) => r.name === name && (r.quantity === "E" || r.quantity === "F"));
    const times = [...new Set(points.map((r) => r.argument))].sort((a, b) => a - b);
    const { readings, balance, stopped } = tracerResponse(
      closedFormPlants[name](),
      { at: "in", form: "pulse" },
      times.map((t) => t * minute),
      { engine: laplace },
    );
    const [{ value, cumulative }] = readings;
    const peak = peakOf(points.filter((r) => r.quantity === "E").map((r) => r.value));
    for (const { quantity, argument, value: wanted } of points) {
      const i = times.indexOf(argument);
      if (quantity === "E") expect(Math.abs(value[i] * minute - wanted)).toBeLessThanOrEqual(1e-8 * peak);
      else expect(Math.abs(cumulative[i] - wanted)).toBeLessThan(1e-8);
    }
    expect(points.length).toBeGreaterThan(3);
    expect(balance.closure).toBeLessThan(1e-9);
    expect(stopped).toBeUndefined();
  });
});

test("plug flow past pockets: a spike at V/Q, then what the pockets held back, from the very moment on", () => {
  // a = q/Q, b = q/h: E = e^-a (spike + e^-bu sqrt(a b/u) I1(2 sqrt(a b u))), the pair of e^(ab/(s+b)), Abramowitz & Stegun 29.3.81
  const plant = plantOf(
    vessel("  a: {kind: tubular, volume: 3 L, stagnant: {volume: 2 L, exchange: 0.5 L/min}, to: out}"),
  );
  const [a, b] = [0.5, 0.25];
  const after = [0, 1e-12, 1e-9, 1e-6, 1e-3, 0.1, 1, 3, 10, 30];
  const times = after.map((u) => (3 + u) * minute);
  const { readings, stopped } = tracerResponse(plant, { at: "in", form: "pulse" }, times);
  const [{ value, spikes }] = readings;
  times.forEach((t, i) => {
    const u = Math.max(0, t / minute - 3); // as rounded
    let bessel = 0; // I1(2 sqrt x) / sqrt x
    for (let k = 0, term = 1; k < 60; k++, term *= (a * b * u) / (k * (k + 1))) bessel += term;
    expect(Math.abs(value[i] * minute - Math.exp(-a - b * u) * a * b * bessel)).toBeLessThan(1e-12);
  });
  expect(spikes.length).toBe(1);
  expect(spikes[0].time).toBeCloseTo(180, 9);
  expect(spikes[0].area).toBeCloseTo(Math.exp(-a), 13);
  expect(stopped).toBeUndefined();
});

const seeds = fc.integer({ min: 1, max: 1e6 });

test("random networks of tanks and tubes: as by the exact engine", () => {
  fc.assert(
    fc.property(seeds, (seed) => {
      const plant = plantOf(randomNetwork(seed));
      const span = (3 * plant.volume.active) / plant.feeds[0].flow;
      const times = Float64Array.from({ length: 40 }, (_, i) => (span * i) / 39);
      const [a, b] = [exact, laplace].map((engine) =>
        tracerResponse(plant, { at: "feed", form: "pulse" }, times, { engine }),
      );
      expect(b.stopped).toBeUndefined();
      a.readings.forEach((reading, r) => {
        const peak = Math.max(peakOf(reading.value), 1e-3 / span);
        const other = b.readings[r];
        for (let i = 0; i < times.length; i++) {
          expect(Math.abs(reading.value[i] - other.value[i])).toBeLessThan(1e-9 * peak);
          expect(Math.abs(reading.cumulative[i] - other.cumulative[i])).toBeLessThan(1e-9);
        }
        expect(other.spikes.length).toBe(reading.spikes.length);
        other.spikes.forEach(({ time, area }, k) => {
          expect(Math.abs(time - reading.spikes[k].time)).toBeLessThan(1e-9 * span);
          expect(Math.abs(area - reading.spikes[k].area)).toBeLessThan(1e-12);
        });
      });
    }),
    { numRuns: 15, seed: 20261204, endOnFailure: true },
  );
});

test("random networks of all kinds: tracer is kept, F rises and is the integral of E, a step is F", () => {
  fc.assert(
    fc.property(seeds, (seed) => {
      const plant = plantOf(randomBlocks(seed, true));
      const span = (3 * plant.volume.active) / plant.feeds[0].flow || 60;
      const times = Float64Array.from({ length: 40 }, (_, i) => (span * i) / 39);
      const pulse = tracerResponse(plant, { at: "feed", form: "pulse" }, times, { engine: laplace });
      const step = tracerResponse(plant, { at: "feed", form: "step" }, times, { engine: laplace });
      expect([pulse.stopped, step.stopped]).toEqual([undefined, undefined]);
      expect(pulse.balance.closure).toBeLessThan(1e-9);
      expect(step.balance.closure).toBeLessThan(1e-9);
      pulse.readings.forEach(({ value, cumulative }, r) => {
        for (let i = 0; i < times.length; i++) {
          expect(value[i]).toBeGreaterThan(-1e-9 * Math.max(peakOf(value), 1 / span));
          if (i > 0) expect(cumulative[i] - cumulative[i - 1]).toBeGreaterThan(-1e-9);
          expect(Math.abs(step.readings[r].value[i] - cumulative[i])).toBeLessThan(1e-9);
        }
      });
    }),
    { numRuns: 12, seed: 20261205, endOnFailure: true },
  );
});

test.each([
  [
    "a tank and a tube, 99 of 100 parts round",
    "  a: {kind: stirred, volume: 0.01 L, to: b}\n  b: {kind: tubular, volume: 1 L, to: {out: 1 %, a: rest}}",
  ],
  ["a thousand tanks", "  a: {kind: stirred, repeat: 1000, volume: 1 L, to: out}"],
  [
    "a tank and a tube, 999 of 1000 parts round",
    "  a: {kind: stirred, volume: 1 L, to: b}\n  b: {kind: tubular, volume: 1 L, to: {out: 0.1 %, a: rest}}",
  ],
])("%s: as by the exact engine", (_, text) => {
  const plant = plantOf(vessel(text));
  const span = (1.5 * plant.volume.active) / plant.feeds[0].flow;
  const times = Float64Array.from({ length: 21 }, (_, i) => (span * i) / 20);
  const [a, b] = [exact, laplace].map((engine) =>
    tracerResponse(plant, { at: "in", form: "pulse" }, times, { engine }),
  );
  const peak = peakOf(a.readings[0].value);
  times.forEach((_, i) => {
    expect(Math.abs(a.readings[0].value[i] - b.readings[0].value[i])).toBeLessThan(1e-9 * peak);
  });
  expect(b.stopped).toBeUndefined();
});

test.each([1.001, 1.01, 1.1, 1.27, 2.5])(
  "a cascade of %f tanks begins with nothing, one of a tank with 1/tau",
  (tanks) => {
    const first = (body: string): number => {
      const plant = plantOf(
        `network: T\nformat: 1\nfeeds: {feed: {flow: 1 m3/s, to: {a: 50 %, b: rest}}}\ncompartments:\n  a: {kind: cascade, volume: 2 m3, tanks: ${tanks}, to: out}\n  b: {kind: ${body}, to: out}\noutlets: [out]\n`,
      );
      return tracerResponse(plant, { at: "feed", form: "pulse" }, [0, 1], { engine: laplace }).readings[0].value[0];
    };
    expect(Math.abs(first(`cascade, volume: 2 m3, tanks: ${tanks}`))).toBeLessThan(1e-10);
    expect(Math.abs(first("cascade, volume: 2 m3, tanks: 1") - 1 / 8)).toBeLessThan(1e-9);
    expect(Math.abs(first("stirred, volume: 2 m3") - 1 / 8)).toBeLessThan(1e-9);
  },
);
