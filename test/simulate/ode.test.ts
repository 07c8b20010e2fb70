import { describe, expect, test } from "vitest";
import { exact } from "../../src/simulate/exact.js";
import { laplace } from "../../src/simulate/laplace.js";
import { instant } from "../../src/simulate/linear-system.js";
import { ode } from "../../src/simulate/ode.js";
import { engineFor } from "../../src/simulate/trace.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { tracerPlant } from "../../src/simulate/tracer-plant.js";
import { vessel } from "../transfer/vessel.js";
import { peakOf, plantOf } from "./plants.js";

/** Largest difference between ode and the engine that is chosen, as a part of the peak; and the balance of ode. */
function compare(body: string, form: "pulse" | "step" = "pulse") {
  const plant = plantOf(vessel(body));
  const unit = plant.volume.active / plant.feeds[0].flow;
  const times = Float64Array.from({ length: 101 }, (_, i) => (i * 4 * unit) / 100);
  const own = engineFor(plant) === ode ? laplace : engineFor(plant);
  const [a, b] = [own, ode].map((engine) => tracerResponse(plant, { at: "in", form }, times, { engine }));
  expect(a.engine).not.toBe("ode");
  expect(b.stopped).toBeUndefined();
  expect(b.balance.closure).toBeLessThan(1e-9);
  let most = 0;
  a.readings.forEach((r, k) => {
    const peak = peakOf(r.value) || 1;
    const other = b.readings[k];
    for (let i = 0; i < times.length; i++) {
      most = Math.max(most, Math.abs(r.value[i] - other.value[i]) / peak);
      most = Math.max(most, Math.abs(r.cumulative[i] - other.cumulative[i]));
    }
    expect(other.spikes.length).toBe(r.spikes.length);
    r.spikes.forEach((s, n) => {
      expect(Math.abs(other.spikes[n].time / s.time - 1)).toBeLessThan(1e-12);
      expect(Math.abs(other.spikes[n].area - s.area)).toBeLessThan(1e-12);
    });
  });
  return most;
}

test.each([1, 3, 10, 30])("a sample just when a pass arrives counts it, in every engine: recycle %d", (recycle) => {
  const plant = plantOf(vessel(`  a: {kind: tubular, volume: 1 L, to: {a: ${recycle} L/min, out: rest}}`));
  // F after k passes through a tube with recycle R: 1 - (R / (1 + R))^k, every 60 / (1 + R) s
  const passes = Array.from({ length: 30 }, (_, k) => k + 1);
  for (const engine of [exact, laplace, ode]) {
    for (const k of passes) {
      const until = Float64Array.of((60 * k) / (1 + recycle));
      for (const form of ["pulse", "step"] as const) {
        const { readings, balance } = tracerResponse(plant, { at: "in", form }, until, { engine });
        expect(Math.abs(readings[0].cumulative[0] - (1 - (recycle / (1 + recycle)) ** k))).toBeLessThan(1e-11);
        expect(balance.closure).toBeLessThan(1e-11);
        if (form === "pulse") expect(readings[0].spikes.length).toBe(k);
      }
    }
  }
});

test("a tube so short in a loop that steps would not end is refused by integration alone, at once", () => {
  const plant = plantOf(
    vessel(
      "  a: {kind: tubular, volume: 1e-8 L, to: b}\n  b: {kind: stirred, volume: 1 L, to: {a: 1 L/min, out: rest}}",
    ),
  );
  const run = (engine?: typeof ode) =>
    tracerResponse(plant, { at: "in", form: "pulse" }, Float64Array.of(60), engine ? { engine } : {});
  expect(() => run(ode)).toThrow(
    expect.objectContaining({ problems: [expect.objectContaining({ code: "loop-too-short" })] }),
  );
  // for its delay, a tank with a recycle is that tank
  expect(Math.abs(run().readings[0].cumulative[0] - (1 - Math.exp(-1)))).toBeLessThan(1e-7);
});

describe("every kind: two independent ways to its curve", () => {
  test.each([
    "stirred, volume: 2 L",
    "stirred, volume: 2 L, repeat: 40, backflow: 80 %",
    "tubular, volume: 2 L",
    "tubular, volume: 2 L, stagnant: {volume: 1 L, exchange: 3 L/min}",
    "dispersed, volume: 2 L, peclet: 0.01",
    "dispersed, volume: 2 L, peclet: 5, stagnant: {volume: 1 L, exchange: 0.4 L/min}",
    "dispersed, volume: 2 L, peclet: 120",
    "dispersed, volume: 2 L, peclet: 3, ends: open",
    "dispersed, volume: 2 L, peclet: 120, ends: open",
    "laminar, volume: 2 L",
    "cascade, volume: 2 L, tanks: 1.4",
    "cascade, volume: 2 L, tanks: 1.95",
    "cascade, volume: 2 L, tanks: 30.5",
    "cascade, volume: 2 L, tanks: 2.7, stagnant: {volume: 1 L, exchange: 0.4 L/min}",
  ])("%s", (keys) => {
    expect(compare(`  a: {kind: ${keys}, to: out}`)).toBeLessThan(1e-9);
    expect(compare(`  a: {kind: ${keys}, to: out}`, "step")).toBeLessThan(1e-9);
  });

  test.each([
    "dispersed, volume: 2 L, peclet: 10000",
    "dispersed, volume: 2 L, peclet: 2000, ends: open",
    "cascade, volume: 2 L, tanks: 600.5",
  ])("far out: %s", (keys) => {
    expect(compare(`  a: {kind: ${keys}, to: out}`)).toBeLessThan(1e-9);
  });
});

describe("tubes in loops", () => {
  test.each([
    [
      "one, and a tank",
      "  a: {kind: tubular, volume: 1 L, to: b}\n  b: {kind: stirred, volume: 1 L, to: {a: 80 %, out: rest}}",
    ],
    ["one alone: spikes", "  a: {kind: tubular, volume: 1 L, to: {a: 80 %, out: rest}}"],
    [
      "two side by side, and no tank",
      "  a: {kind: junction, to: {b: 50 %, c: rest}}\n  b: {kind: tubular, volume: 1 L, to: d}\n  c: {kind: tubular, volume: 1.5 L, to: d}\n  d: {kind: junction, to: {a: 60 %, out: rest}}",
    ],
    [
      "laminar flow in a loop, behind a tube",
      "  a: {kind: tubular, volume: 0.3 L, to: b}\n  b: {kind: laminar, volume: 2 L, to: {a: 60 %, out: rest}}",
    ],
    [
      "three, and narrow tanks between: quiet most of the time",
      "  a: {kind: cascade, volume: 0.02 L, tanks: 13, to: b}\n  b: {kind: tubular, volume: 0.7 L, to: c}\n  c: {kind: tubular, volume: 0.5 L, to: d}\n  d: {kind: tubular, volume: 0.9 L, to: {a: 80 %, out: rest}}",
    ],
    [
      "four, with dispersed flow and a cascade between",
      "  a: {kind: tubular, volume: 0.3 L, to: b}\n  b: {kind: dispersed, volume: 2 L, peclet: 30, to: c}\n  c: {kind: tubular, volume: 0.5 L, to: {a: 30 %, d: rest}}\n  d: {kind: cascade, volume: 1 L, tanks: 2.3, to: {e: 50 %, f: rest}}\n  e: {kind: tubular, volume: 0.2 L, to: a}\n  f: {kind: tubular, volume: 0.7 L, to: {d: 40 %, out: rest}}",
    ],
  ])("%s", (_, body) => {
    expect(compare(body)).toBeLessThan(1e-8);
    expect(compare(body, "step")).toBeLessThan(1e-8);
  });
});

test("a chain of tubes between tanks is read off exactly", () => {
  const chain = Array.from({ length: 6 }, (_, i) => {
    const next = i < 5 ? `a${i + 1}` : "out";
    return `  a${i}: {kind: stirred, volume: 0.5 L, to: b${i}}\n  b${i}: {kind: tubular, volume: 0.${i + 1} L, to: ${next}}`;
  }).join("\n");
  expect(compare(chain.replace(/a0/g, "a"))).toBeLessThan(1e-9);
});

test("a narrow front that comes out of a tube is not stepped over", () => {
  const bodies =
    "  a: {kind: dispersed, volume: 0.02 L, peclet: 3000, to: b}\n  b: {kind: tubular, volume: 5 L, to: c}\n  c: {kind: stirred, volume: 0.1 L, to: d}\n  d: {kind: tubular, volume: 3 L, to: e}\n  e: {kind: dispersed, volume: 1 L, peclet: 20, to: out}";
  expect(compare(bodies)).toBeLessThan(1e-8);
});

test("a tracer that is held back and lost, in every kind of body", () => {
  const liquid = plantOf(
    vessel(
      "  a: {kind: tubular, volume: 1 L, stagnant: {volume: 0.3 L, exchange: 0.5 L/min}, to: b}\n  b: {kind: laminar, volume: 1 L, to: c}\n  c: {kind: dispersed, volume: 1 L, peclet: 7, to: d}\n  d: {kind: cascade, volume: 1 L, tanks: 2.4, to: out}",
    ),
  );
  const at = liquid.network.at;
  const plant = tracerPlant(liquid, {
    loss: 0.004,
    retained: ["a", "b", "c"].map((body) => ({ body, at, factor: 1.4 })),
  });
  const times = Float64Array.from({ length: 50 }, (_, i) => 20 * i);
  const [a, b] = [laplace, ode].map((engine) => tracerResponse(plant, { at: "in", form: "pulse" }, times, { engine }));
  const peak = peakOf(a.readings[0].value);
  times.forEach((_, i) => {
    expect(Math.abs(a.readings[0].value[i] - b.readings[0].value[i])).toBeLessThan(1e-8 * peak);
  });
});

test("what leaves a loop of one tube at the very end of the curve is counted once, for all rounding", () => {
  for (const recycle of [10, 100, 1000]) {
    const plant = plantOf(`network: A tube that goes round
format: 1
feeds: {feed: {flow: 1 m3/s, to: meet}}
compartments:
  meet: {kind: junction, to: tube}
  tube: {kind: tubular, volume: 1 m3, to: {meet: ${recycle} m3/s, out: rest}}
outlets: [out]
`);
    const { balance } = tracerResponse(plant, { at: "feed", form: "pulse" }, [1, 3], { engine: ode });
    expect(balance.closure).toBeLessThan(1e-9);
  }
});

test("the amount put in is a factor, however large or small a double can hold it", () => {
  const plant = plantOf(
    vessel("  a: {kind: stirred, volume: 1 L, to: b}\n  b: {kind: dispersed, peclet: 20, volume: 2 L, to: out}"),
  );
  const unit = plant.volume.active / plant.feeds[0].flow;
  const times = Float64Array.from({ length: 21 }, (_, i) => (i * 3 * unit) / 20);
  const entry = plant.entry.get("in") as number;
  const { node } = plant.outlets[0];
  const seen = (amount: number) => {
    const tracing = ode.trace(plant, entry, 3 * unit);
    const drive = { ...instant(amount) };
    return { ...tracing.see(drive, [{ node, times }]).seen[0], closure: tracing.balance(drive, 3 * unit).closure };
  };
  const one = seen(1);
  const peak = peakOf(one.value);
  for (const [amount, digits] of [
    [2 ** 990, 0],
    [2 ** -960, 0],
    [2 ** -1030, 1e-6], // few digits are left in such numbers themselves
  ]) {
    const other = seen(amount);
    other.value.forEach((c, i) => {
      expect(Math.abs(c / amount - one.value[i])).toBeLessThanOrEqual(digits * peak);
    });
    expect(other.closure).toBeLessThan(Math.max(1e-9, digits));
  }
});

test("a time of more mean times than it may make steps is refused at once, and said", () => {
  const plant = plantOf(vessel("  a: {kind: stirred, volume: 1e-150 L, to: out}"));
  const { stopped } = tracerResponse(plant, { at: "in", form: "pulse" }, [3600], { engine: ode });
  expect(stopped).toContain("too many steps");
});
