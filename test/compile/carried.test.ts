import { describe, expect, test } from "vitest";
import { uncarried } from "../../src/compile/carried.js";
import { RefusedError } from "../../src/problems/refused.js";
import { exact } from "../../src/simulate/exact.js";
import { ode } from "../../src/simulate/ode.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { plantOf } from "../simulate/plants.js";
import { vessel } from "../transfer/vessel.js";

const blocks = {
  "axial dispersion": "dispersed, volume: 5 L, peclet: 4",
  "laminar flow": "laminar, volume: 5 L",
  "a cascade": "cascade, volume: 5 L, tanks: 3",
  "plug flow past stagnant pockets": "tubular, volume: 5 L, stagnant: {volume: 1 L, exchange: 1 L/min}",
};

describe.each(Object.entries(blocks))("%s", (is, keys) => {
  const plant = plantOf(vessel(`  a: {kind: ${keys}, to: out}`));

  test("is refused by the exact engine, with its name and place; laplace, ode and reaction carry it", () => {
    const [problem] = uncarried(plant);
    expect(problem).toMatchObject({ code: "not-carried", severity: "error" });
    expect(problem.message).toBe(`'a' is ${is}, which the exact engine cannot follow in time`);
    expect(problem.at.source.text.slice(problem.at.from)).toMatch(/^a: /);
    expect(() => tracerResponse(plant, { at: "in", form: "pulse" }, [0, 60], { engine: exact })).toThrow(RefusedError);
    expect(uncarried(plant, "ode")).toEqual([]);
    expect(tracerResponse(plant, { at: "in", form: "pulse" }, [0, 60], { engine: ode }).stopped).toBeUndefined();
    expect(uncarried(plant, "laplace")).toEqual([]);
    expect(tracerResponse(plant, { at: "in", form: "pulse" }, [0, 60]).engine).toBe("laplace");
    expect(uncarried(plant, "reaction")).toEqual([]);
  });
});

test("what cells, tubes and joints can spell is carried, pockets without volume or exchange too", () => {
  const plant = plantOf(
    vessel(`  a: {kind: tubular, volume: 5 L, stagnant: {volume: 0 L, exchange: 1 L/min}, to: b}
  b: {kind: stirred, repeat: 3, backflow: 1 L/min, volume: 3 L, stagnant: {volume: 1 L, exchange: 1 L/min}, to: c}
  c: {kind: tubular, volume: 5 L, stagnant: {volume: 2 L, exchange: 0 L/min}, to: d}
  d: {kind: laminar, volume: 0 L, to: out}`),
  );
  expect(uncarried(plant)).toEqual([]);
  expect(plant.volume.total).toBeCloseTo(0.016, 15);
  expect(plant.volume.dead).toBeCloseTo(0.002, 15);
});

test("more cells than an engine does in reasonable time are refused with their number, not tried", () => {
  const row = (n: number) => `  a: {kind: stirred, repeat: ${n}, backflow: 1 L/min, volume: 3 L, to: out}`;
  const circle = plantOf(vessel(row(1001)));
  for (const work of ["tracer", "reaction"] as const) expect(uncarried(circle, work)).toEqual([]);
  const [problem] = uncarried(circle, "laplace");
  expect(problem).toMatchObject({ code: "too-many-cells", severity: "error" });
  expect(problem.message).toBe(
    "1001 nodes of the network feed one another; this version can compute tracer curves by transfer functions of up to 1000",
  );
  const large = { ...circle, columns: { ...circle.columns, size: 20_001 } };
  expect(() => tracerResponse(large, { at: "in", form: "pulse" }, [0, 60], { engine: exact })).toThrow(RefusedError);
});
