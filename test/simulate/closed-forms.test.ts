import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { exact } from "../../src/simulate/exact.js";
import { ode } from "../../src/simulate/ode.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { peakOf, plantOf } from "./plants.js";
import { vessels } from "./vessels.js";

// 30-digit closed forms; formulas and sources in shared/reference/closed-forms/models.json
const rows = readFileSync("shared/reference/closed-forms/curves-moments-conversions.csv", "utf8")
  .split("\n")
  .slice(1)
  .map((line) => line.split(","))
  .map(([name, quantity, argument, value]) => ({ name, quantity, argument: Number(argument), value: Number(value) }));

const minute = 60;

describe.each([exact, ode])("$name engine", (engine) => {
  test.each(Object.keys(vessels))("%s agrees with its closed form", (name) => {
    const plant = plantOf(vessels[name]);
    const points = rows.filter((r) => r.name === name && (r.quantity === "E" || r.quantity === "F"));
    const times = [...new Set(points.map((r) => r.argument))].sort((a, b) => a - b);
    const { readings, balance, stopped } = tracerResponse(
      plant,
      { at: "in", form: "pulse" },
      times.map((t) => t * minute),
      { engine },
    );
    const [{ value, cumulative }] = readings;
    const peak = peakOf(points.filter((r) => r.quantity === "E").map((r) => r.value));
    for (const { quantity, argument, value: wanted } of points) {
      const i = times.indexOf(argument);
      if (quantity === "E") expect(Math.abs(value[i] * minute - wanted)).toBeLessThan(1e-8 * peak);
      else expect(Math.abs(cumulative[i] - wanted)).toBeLessThan(1e-8);
    }
    expect(points.length).toBeGreaterThan(3);
    expect(balance.closure).toBeLessThan(1e-9);
    expect(stopped).toBeUndefined();
  });
});

test.each(Object.keys(vessels))("%s has the moments of its closed form", (name) => {
  const plant = plantOf(vessels[name]);
  const [{ moments }] = tracerResponse(plant, { at: "in", form: "pulse" }, [0]).readings;
  const wanted = (quantity: string) => rows.find((r) => r.name === name && r.quantity === quantity)?.value as number;
  expect(moments.mean / minute).toBeCloseTo(wanted("mean"), 10);
  const variance = wanted("variance");
  expect(Math.abs(moments.variance / minute ** 2 - variance)).toBeLessThan(1e-10 * Math.max(1, variance));
  const third = rows.find((r) => r.name === name && r.quantity === "third-central-moment")?.value;
  if (third !== undefined && variance > 0) expect(moments.skewness).toBeCloseTo(third / variance ** 1.5, 8);
});

test("a tube in a recycle gives spikes that fall by R/(R+1), no smear", () => {
  const plant = plantOf(vessels["recycle-plug-R3-tau10"]);
  const times = Float64Array.from({ length: 101 }, (_, i) => i * minute);
  const [{ spikes, value, spikesLeftOut }] = tracerResponse(plant, { at: "in", form: "pulse" }, times).readings;
  expect(peakOf(value)).toBe(0);
  spikes.forEach(({ time, area }, n) => {
    expect(time).toBeCloseTo((n + 1) * 2.5 * minute, 6);
    expect(area).toBeCloseTo(0.25 * 0.75 ** n, 12);
  });
  expect(spikes.length).toBe(40);
  expect(spikesLeftOut).toBe(0);
});

test("values are limits from the right", () => {
  const tank = tracerResponse(plantOf(vessels["stirred-tank-tau5"]), { at: "in", form: "pulse" }, [0, 300]).readings[0];
  expect(tank.value[0] * minute).toBeCloseTo(0.2, 12);
  const tube = tracerResponse(plantOf(vessels["plug-flow-tau3"]), { at: "in", form: "step" }, [179.999, 180])
    .readings[0];
  expect([...tube.value]).toEqual([0, 1]);
});
