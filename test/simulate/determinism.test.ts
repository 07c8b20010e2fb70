import { describe, expect, test } from "vitest";
import { exact } from "../../src/simulate/exact.js";
import { laplace } from "../../src/simulate/laplace.js";
import { ode } from "../../src/simulate/ode.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { peakOf, plantOf } from "./plants.js";
import { randomMixed } from "./random-mixed.js";
import { randomNetwork } from "./random-network.js";

const cells = plantOf(randomNetwork(7));
const mixed = plantOf(randomMixed(6 * 7919 + 13, 8));

/**
 * The same input gives the same bytes, and a sample does not depend on the other times asked: to the byte where balances are
 * integrated. Which passes laplace takes apart hangs on the windows asked for, so there rounding does.
 */
describe.each([
  ["exact", exact, cells],
  ["ode, cells and tubes", ode, cells],
  ["laplace", laplace, mixed],
  ["ode, all kinds", ode, mixed],
] as const)("%s", (_, engine, plant) => {
  const same = (a: number, b: number, peak: number) =>
    engine === laplace ? expect(Math.abs(a - b)).toBeLessThan(1e-13 * peak) : expect(a).toBe(b);
  const unit = plant.volume.active / plant.feeds[0].flow;
  const at = (times: readonly number[], form: "pulse" | "step" = "pulse") =>
    tracerResponse(plant, { at: "feed", form }, times, { engine }).readings.map((r) => [...r.value, ...r.cumulative]);
  const times = Array.from({ length: 61 }, (_, i) => (2 * unit * i) / 60);

  test("twice is the same, to the byte", () => {
    expect(at(times)).toEqual(at(times));
  });

  test.each(["pulse", "step"] as const)("%s: a sample does not depend on the other times asked", (form) => {
    const n = times.length;
    const all = at(times, form);
    for (const chosen of [[15], [30], [15, 30, 45], [60], [7, 60]]) {
      const few = at(
        chosen.map((i) => times[i]),
        form,
      );
      few.forEach((curve, r) => {
        chosen.forEach((i, k) => {
          same(curve[k], all[r][i], peakOf(all[r]));
          same(curve[chosen.length + k], all[r][n + i], 1);
        });
      });
    }
  });
});
