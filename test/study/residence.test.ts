import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { parseNetwork } from "../../src/parse/network.js";
import { autocorrelation } from "../../src/report/study/residual-figure.js";
import { residenceOf } from "../../src/study/residence.js";

const read = (path: string): Uint8Array => readFileSync(path);
const plantOf = (text: string, path = "x.yaml") =>
  compile(parseNetwork(text, { path, read, allowOutside: true }).document!).plant!;
const tank = (volume: number) => `network: Tank
format: 1
feeds: {water: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: ${volume} L, to: drain}}
outlets: [drain]
`;

describe("how long the liquid stays", () => {
  test("of a stirred tank E = I, the intensity is level, F and W add to one", () => {
    const r = residenceOf(plantOf(tank(10)), [])!;
    r.time.forEach((t, k) => {
      const e = Math.exp(-t / 600) / 600;
      expect(r.exitAge.value[k]).toBeCloseTo(e, 9);
      expect(r.internalAge.value[k]).toBeCloseTo(e, 9);
      expect(r.left.value[k] + r.washout.value[k]).toBeCloseTo(1, 12);
      if (r.washout.value[k] > 2e-3) expect(r.intensity.value[k]).toBeCloseTo(1 / 600, 7);
    });
    expect(r.exitAge.band).toBeUndefined();
  });

  test("of several outlets all together: the areas of E with its spikes and of I are one", () => {
    const text = `network: Two ways out
format: 1
feeds: {water: {flow: 4 L/min, to: {tank: rest, tube: 25 %}}}
compartments:
  tank: {kind: stirred, volume: 10 L, to: {drain: rest, purge: 30 %}}
  tube: {kind: tubular, volume: 3 L, to: purge}
outlets: [drain, purge]
`;
    const r = residenceOf(plantOf(text), [])!;
    const area = (y: Float64Array): number =>
      y.reduce((sum, v, k) => (k === 0 ? 0 : sum + 0.5 * (v + y[k - 1]) * (r.time[k] - r.time[k - 1])), 0);
    expect(r.spikes).toEqual([{ time: expect.closeTo(180, 9), area: expect.closeTo(0.25, 12) }]);
    expect(area(r.exitAge.value) + 0.25).toBeCloseTo(1, 2);
    expect(area(r.internalAge.value)).toBeCloseTo(1, 2);
    expect(r.left.value[r.left.value.length - 1]).toBeCloseTo(0.999, 3);
  });

  test("a band holds the curves of the draws", () => {
    const text = tank(10)
      .replace("volume: 10 L", "volume: size")
      .replace("feeds:", "parameters: {size: {value: 10 L, between: [1 L, 20 L]}}\nfeeds:");
    const plant = plantOf(text);
    const draws = Array.from({ length: 41 }, (_, k) => ({ size: (8 + k * 0.1) * 1e-3 }));
    const { band, value } = residenceOf(plant, draws)!.left;
    value.forEach((v, k) => {
      expect(band!.low[k]).toBeLessThanOrEqual(v + 1e-12);
      expect(band!.high[k]).toBeGreaterThanOrEqual(v - 1e-12);
    });
  });

  test("a closed vessel has none", () => {
    const path = "networks/washout/two-zones.yaml";
    const plant = plantOf(readFileSync(path, "utf8"), path);
    expect(plant.feeds.length === 0 ? residenceOf(plant, []) : undefined).toBeUndefined();
  });
});

test("autocorrelation of an alternating series is -1 and then 1, short of the ends; of a constant 0", () => {
  const series = Array.from({ length: 200 }, (_, k) => (k % 2 === 0 ? 1 : -1));
  const [one, two] = autocorrelation(series, 2);
  expect(one).toBeCloseTo(-199 / 200, 12);
  expect(two).toBeCloseTo(198 / 200, 12);
  expect([...autocorrelation([3, 3, 3], 1)]).toEqual([0]);
});
