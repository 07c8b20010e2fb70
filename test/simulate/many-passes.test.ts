import { describe, expect, test } from "vitest";
import { exact } from "../../src/simulate/exact.js";
import { laplace } from "../../src/simulate/laplace.js";
import { ode } from "../../src/simulate/ode.js";
import { engineFor } from "../../src/simulate/trace.js";
import { settlingTime, tracerResponse } from "../../src/simulate/tracer.js";
import { vessel } from "../transfer/vessel.js";
import { plantOf } from "./plants.js";

const pulse = { at: "in", form: "pulse" } as const;

describe("two tubes in a circle, 1000 of 1001 parts going round", () => {
  const plant = plantOf(
    vessel(`  a: {kind: tubular, volume: 1 L, to: b}
  b: {kind: tubular, volume: 2 L, to: {a: 1000 L/min, out: rest}}`),
  );
  const flow = plant.feeds[0].flow;
  const [mean, pass] = [plant.volume.active / flow, plant.volume.active / (1001 * flow)];

  test.each([exact, ode])("every pass is there after seven mean times, and no tracer is lost: $name", (engine) => {
    // Beside a pass, not at it.
    const until = 7 * mean + pass / 2;
    const { readings, balance, stopped } = tracerResponse(plant, pulse, [until], { engine });
    const passes = Math.floor(until / pass);
    expect(stopped).toBeUndefined();
    expect(Math.abs(readings[0].cumulative[0] - (1 - (1000 / 1001) ** passes))).toBeLessThan(1e-9);
    expect(balance.closure).toBeLessThan(1e-9);
  });

  test("an engine that cannot follow them all says up to when it did", () => {
    const { stopped } = tracerResponse(plant, pulse, [60 * mean], { engine: laplace });
    expect(stopped).toContain("too often");
  });
});

test("a tank and a tube, 1000 of 1001 parts going round: an answer in good time, near that of one tank", () => {
  const plant = plantOf(
    vessel(`  a: {kind: stirred, volume: 1 L, to: b}
  b: {kind: tubular, volume: 2 L, to: {a: 1000 L/min, out: rest}}`),
  );
  const mean = plant.volume.active / plant.feeds[0].flow;
  expect(engineFor(plant, 9 * mean).name).toBe("ode");
  expect(settlingTime(plant, "in") / mean).toBeCloseTo(Math.log(1000), 1);
  const times = [0.5, 1, 3, 6].map((t) => t * mean);
  const [own, other] = [ode, laplace].map((engine) => tracerResponse(plant, pulse, times, { engine }));
  expect(own.balance.closure).toBeLessThan(1e-9);
  own.readings[0].value.forEach((e, i) => {
    expect(Math.abs(e - other.readings[0].value[i]) * mean).toBeLessThan(1e-8);
    expect(Math.abs(e * mean - Math.exp(-times[i] / mean))).toBeLessThan(2e-3);
  });
});

test("times that do not ascend, are not finite or begin before the injection are refused, and so is a form that is none", () => {
  const plant = plantOf(vessel("  a: {kind: stirred, volume: 1 L, to: out}"));
  for (const times of [
    [600, 60],
    [Number.NaN, 1],
    [1, Number.POSITIVE_INFINITY],
    [-1, 1],
  ])
    expect(() => tracerResponse(plant, pulse, times)).toThrow(RangeError);
  expect(() => tracerResponse(plant, { at: "in", form: "ramp" as "step" }, [1])).toThrow(RangeError);
});
