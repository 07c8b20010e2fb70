import { readdirSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import { type SameCurve, sameCurves } from "../../src/plan/same-curve.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { networkOf } from "../fit/load.js";

const folder = new URL("../../shared/parts/", import.meta.url);
const library = readdirSync(folder)
  .filter((f) => f.endsWith(".yaml"))
  .map((f) => networkOf(readFileSync(new URL(f, folder), "utf8"), f));

const plantOf = (path: string, settings: Record<string, number>): Plant => {
  const network = library.find((n) => n.at.source.path === path);
  const { plant } = network ? compile(network, settings) : { plant: undefined };
  if (!plant) throw new Error(path);
  return plant;
};
const value = (found: readonly SameCurve[], path: string, name: string): number =>
  found.find((s) => s.path === path)?.settings[name] ?? Number.NaN;

describe("networks of the library with the same curve", () => {
  // Worked from the transfer functions: tank 0.8 V with a stagnant 0.2 V, exchange 0.05 Q; tanks side by side, flow 0.9294 and
  // 0.0706, volumes 0.7004 and 0.2996; 5.80 % of the feed by a tank of 0.2464, then all in one of 0.7536.
  test("a tank with a stagnant corner, two tanks side by side, and a split feed", () => {
    const found = sameCurves(plantOf("quiet-corner.yaml", { corner: 0.2, renewal: 0.05 }), library);
    expect(found.map((s) => s.path)).toEqual(["parallel-tanks.yaml", "side-tank.yaml"]);
    // The first tank may be either of the two.
    expect(value(found, "parallel-tanks.yaml", "fast")).toBeCloseTo(0.0706, 4);
    expect(value(found, "parallel-tanks.yaml", "room")).toBeCloseTo(0.2996, 4);
    expect(value(found, "side-tank.yaml", "aside")).toBeCloseTo(0.058, 4);
    expect(value(found, "side-tank.yaml", "room")).toBeCloseTo(0.2464, 4);
  });

  test("it is the same from each of the three, and the curves in time agree", () => {
    const start = plantOf("quiet-corner.yaml", { corner: 0.3, renewal: 0.2 });
    const times = Float64Array.from({ length: 40 }, (_, i) => 600 * (i + 0.5));
    const curve = (plant: Plant): Float64Array =>
      tracerResponse(plant, { at: "feed", form: "pulse" }, times).readings[0].value as Float64Array;
    const expected = curve(start);
    for (const { path, settings } of sameCurves(start, library)) {
      const other = plantOf(path, settings);
      const off = curve(other).map((v, i) => v - expected[i]);
      expect(Math.max(...off.map(Math.abs)) / Math.max(...expected)).toBeLessThan(1e-9);
      expect(sameCurves(other, library).map((s) => s.path)).toContain("quiet-corner.yaml");
    }
  });

  test("the order of a tube and a tank", () => {
    const found = sameCurves(plantOf("tube-then-tank.yaml", { plug: 0.35, dead: 0.2 }), library);
    expect(value(found, "tank-then-tube.yaml", "plug")).toBeCloseTo(0.35, 6);
    expect(value(found, "tank-then-tube.yaml", "dead")).toBeCloseTo(0.2, 6);
  });

  test("a vessel is not its own rival, and one like no other has none", () => {
    for (const path of ["recycle-tube.yaml", "stagnant-cells.yaml", "side-capture.yaml"])
      expect(sameCurves(plantOf(path, {}), library)).toEqual([]);
  });

  test("what has two outlets is left alone", () => {
    const two = networkOf(`network: Two ways out
format: 1
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 100 L, to: {over: 30 %, under: rest}}}
outlets: [over, under]
`);
    const { plant } = compile(two);
    expect(plant && sameCurves(plant, library)).toEqual([]);
  });
});
