import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { laplace } from "../../src/simulate/laplace.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { closedFormPlants } from "./block-vessels.js";
import { peakOf } from "./plants.js";

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
