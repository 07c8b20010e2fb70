import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { Plant } from "../../src/compile/plant.js";
import { isCellsOnly } from "../../src/simulate/cell-system.js";
import { chebyshev } from "../../src/simulate/chebyshev.js";
import { exact } from "../../src/simulate/exact.js";
import { krylov } from "../../src/simulate/krylov.js";
import type { Drive } from "../../src/simulate/linear-system.js";
import { trace, untraceable } from "../../src/simulate/trace.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { peakOf, plantOf } from "./plants.js";
import { randomNetwork } from "./random-network.js";
import { zonedPlant } from "./zoned.js";

/** A random network of tanks and junctions alone. */
const cellsOnly = (seed: number): Plant => plantOf(randomNetwork(seed).replaceAll("kind: tubular", "kind: stirred"));
const span = (plant: Plant): number => (3 * plant.volume.active) / plant.feeds[0].flow;
const grid = (end: number, n: number): Float64Array => Float64Array.from({ length: n }, (_, i) => (end * i) / (n - 1));

describe.each([chebyshev, krylov])("large networks by $name", (engine) => {
  test("agrees with the exact engine on any network of cells: curves, integrals, balance, inner places", () => {
    let seen = 0;
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 1e6 }), fc.constantFrom("pulse", "step"), (seed, form) => {
        const plant = cellsOnly(seed);
        if (!isCellsOnly(plant)) return;
        seen++;
        const times = grid(span(plant), 40);
        const inner = plant.network.compartments.find((c) => c.name.startsWith("n"))?.name ?? "out";
        const [a, b] = [exact, engine].map((one) =>
          tracerResponse(plant, { at: "feed", form }, times, { engine: one, at: [inner] }),
        );
        a.readings.forEach((reading, r) => {
          const peak = Math.max(peakOf(reading.value), 1e-6 / span(plant));
          const sum = Math.max(peakOf(reading.cumulative), 1e-6);
          for (let i = 0; i < times.length; i++) {
            expect(Math.abs(reading.value[i] - b.readings[r].value[i])).toBeLessThan(1e-9 * peak);
            expect(Math.abs(reading.cumulative[i] - b.readings[r].cumulative[i])).toBeLessThan(1e-9 * sum);
          }
          expect(b.readings[r].spikes).toHaveLength(reading.spikes.length);
          b.readings[r].spikes.forEach(({ time, area }, k) => {
            expect(time).toBe(reading.spikes[k].time);
            expect(area).toBeCloseTo(reading.spikes[k].area, 14);
          });
        });
        expect(b.balance.closure).toBeLessThan(1e-10);
        expect(Math.abs(a.balance.inside - b.balance.inside)).toBeLessThan(1e-9 * a.balance.injected);
      }),
      { numRuns: 60, seed: 20261201 },
    );
    expect(seen).toBeGreaterThan(30);
  });

  test("follows any drive, and what slow detectors make of it", () => {
    for (const seed of [2, 5, 31]) {
      const plant = cellsOnly(seed);
      const end = span(plant);
      const drive: Drive = {
        amount: 0.7,
        times: Float64Array.of(0, end / 9, end / 3, end / 2),
        level: Float64Array.of(1 / end, 0, 3 / end, 0),
        slope: Float64Array.of(0, 4 / end ** 2, -6 / end ** 2, 0),
      };
      const entry = plant.entry.get("feed") as number;
      const times = grid(end, 30);
      const looks = plant.outlets.flatMap(({ node }) => [
        { node, times, integral: true },
        { node, times, lag: end / 40, integral: false },
      ]);
      const [a, b] = [exact, engine].map((one) => trace(plant, entry, end, one).see(drive, looks).seen);
      a.forEach((one, r) => {
        const peak = peakOf(one.value);
        for (let i = 0; i < times.length; i++) {
          expect(Math.abs(one.value[i] - b[r].value[i])).toBeLessThan(1e-9 * peak);
          if (looks[r].integral !== false)
            expect(Math.abs(one.integral[i] - b[r].integral[i])).toBeLessThan(1e-9 * peak * end);
        }
      });
    }
  });

  test("is refused where there are tubes", () => {
    const plant = plantOf(
      randomNetwork(3)
        .replace("kind: stirred", "kind: tubular")
        .replace(/, exchange: [^}]*}/, ""),
    );
    expect(isCellsOnly(plant)).toBe(false);
    const asked = () => tracerResponse(plant, { at: "feed", form: "pulse" }, [1], { engine });
    expect(asked).toThrow(RangeError);
  });
});

describe("the series", () => {
  test("2,000 tanks in a row: the Erlang density, nearly all flow through and nothing exchanged", () => {
    const n = 2000;
    const plant = plantOf(`network: Row
format: 1
feeds: {feed: {flow: 1 L/s, to: row}}
compartments: {row: {kind: stirred, repeat: ${n}, volume: 2000 L, to: out}}
outlets: [out]
`);
    const times = grid(4000, 81);
    const result = tracerResponse(plant, { at: "feed", form: "pulse" }, times);
    expect(result.engine).toBe("chebyshev");
    expect(result.stopped).toBeUndefined();
    const { value } = result.readings[0];
    let logFactorial = 0;
    for (let k = 2; k < n; k++) logFactorial += Math.log(k);
    const density = times.map((t) => (t > 0 ? Math.exp((n - 1) * Math.log(t) - t - logFactorial) : 0));
    const peak = peakOf(density);
    // The logarithms of the closed form itself are good to 1e-11.
    times.forEach((_, i) => {
      expect(Math.abs(value[i] - density[i])).toBeLessThan(1e-9 * peak);
    });
  });

  test("a sample does not depend on the others asked, to the byte", () => {
    const plant = cellsOnly(5);
    const times = grid(span(plant), 50);
    const by = (asked: Float64Array) =>
      tracerResponse(plant, { at: "feed", form: "pulse" }, asked, { engine: chebyshev }).readings[0];
    const all = by(times);
    for (const i of [3, 17, 49]) {
      expect(by(times.subarray(i, i + 1)).value[0]).toBe(all.value[i]);
      expect(by(times.subarray(i, i + 1)).cumulative[0]).toBe(all.cumulative[i]);
    }
  });
});

describe("zones from tables", () => {
  const curve = (plant: Plant, engine?: typeof chebyshev) => {
    const times = grid(span(plant), 60);
    return tracerResponse(plant, { at: "feed", form: "pulse" }, times, engine ? { engine } : {});
  };
  const difference = (a: Float64Array, b: Float64Array): number =>
    a.reduce((most, v, i) => Math.max(most, Math.abs(v - b[i])), 0) / peakOf(a);

  test.each([
    ["rates near one another", 0.5, "chebyshev"],
    ["volumes over four decades", 4, "krylov"],
  ])("%s: the method suits the network, two agree, mean and balance hold", (_name, decades, name) => {
    const plant = zonedPlant(8, decades);
    const own = curve(plant);
    expect(own.engine).toBe(name);
    expect(own.stopped).toBeUndefined();
    const other = curve(plant, name === "krylov" ? chebyshev : krylov);
    expect(difference(own.readings[0].value, other.readings[0].value)).toBeLessThan(1e-9);
    expect(difference(own.readings[0].cumulative, other.readings[0].cumulative)).toBeLessThan(1e-9);
    expect(own.balance.closure).toBeLessThan(1e-10);
    const tau = plant.volume.active / plant.feeds[0].flow;
    expect(own.readings[0].moments.mean / tau - 1).toBeCloseTo(0, 12);
  });

  test("the order of the cells does not matter", () => {
    const [one, other] = [zonedPlant(8, 1), zonedPlant(8, 1, (i) => (i * 211) % 512)].map((plant) => curve(plant));
    expect(difference(one.readings[0].value, other.readings[0].value)).toBeLessThan(1e-11);
  });

  test("30,000 cells are no obstacle, and a run can be ended", () => {
    const plant = zonedPlant(31, 0.5);
    expect(untraceable(plant)).toEqual([]);
    const calls: number[] = [];
    const watch = (done: number, of: number): boolean => {
      calls.push(done / of);
      return calls.length > 5;
    };
    const ended = tracerResponse(plant, { at: "feed", form: "pulse" }, grid(span(plant), 9), { watch });
    expect(ended.stopped).toContain("ended");
    expect(calls.every((part, i) => part <= 1 && (i === 0 || part >= calls[i - 1]))).toBe(true);
  });
});
