import { expect, test } from "vitest";
import { laplace } from "../../src/simulate/laplace.js";
import { moments } from "../../src/simulate/moments.js";
import { ode } from "../../src/simulate/ode.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { peakOf, plantOf } from "./plants.js";
import { randomMixed } from "./random-mixed.js";

/** `npm run fuzz -- --networks N --seed S` asks for other numbers. */
const networks = Number(process.env.BACKMIX_NETWORKS ?? 100);
const seed = Number(process.env.BACKMIX_SEED ?? 1);
const inOneTest = 5;

/** Networks of one part, 0 to `parts` - 1: files run side by side. */
export function randomNetworksHold(part: number, parts: number): void {
  const numbers = Array.from({ length: networks }, (_, n) => n).filter((n) => n % parts === part);
  const groups = Array.from({ length: Math.ceil(numbers.length / inOneTest) }, (_, g) =>
    numbers.slice(g * inOneTest, (g + 1) * inOneTest),
  );
  test.each(groups.map((group) => [group]))(
    "random networks %j of all kinds: transforms and integration agree; all leaves after V/Q; F rises; tracer is kept",
    (group) => {
      for (const n of group) hold(n);
    },
    600_000,
  );
}

function hold(n: number): void {
  const text = randomMixed((seed * 100_003 + n) * 7919 + 13);
  const say = `network ${n} of seed ${seed}\n${text}`;
  const plant = plantOf(text);
  const unit = plant.volume.active / plant.feeds[0].flow;
  const all = moments(plant, plant.entry.get("feed") as number);
  const reached = plant.outlets.filter((o) => all[o.node].share > 0);
  const share = reached.reduce((sum, o) => sum + all[o.node].share, 0);
  const mean = reached.reduce((sum, o) => sum + all[o.node].share * all[o.node].mean, 0);
  expect(Math.abs(share - 1), say).toBeLessThan(1e-12);
  expect(Math.abs(mean / unit - 1), say).toBeLessThan(1e-11);
  const times = Float64Array.from({ length: 41 }, (_, i) => (1.2 * unit * i) / 40);
  const pulse = { at: "feed", form: "pulse" } as const;
  const [first, second] = [laplace, ode].map((engine) => tracerResponse(plant, pulse, times, { engine }));
  for (const { balance, stopped } of [first, second]) {
    expect(stopped, say).toBeUndefined();
    expect(balance.closure, say).toBeLessThan(1e-9);
  }
  first.readings.forEach((reading, r) => {
    const beside = second.readings[r];
    // An outlet of which less than 1e-7 leaves in a mean time has not begun: nothing there but rounding.
    const peak = Math.max(peakOf(reading.value), 1e-7 / unit);
    expect(beside.spikes.length, say).toBe(reading.spikes.length);
    for (let i = 0; i < times.length; i++) {
      expect(Math.abs(reading.value[i] - beside.value[i]) / peak, say).toBeLessThan(1e-6);
      expect(Math.abs(reading.cumulative[i] - beside.cumulative[i]), say).toBeLessThan(1e-6);
      if (i === 0) continue;
      expect(reading.cumulative[i] - reading.cumulative[i - 1], say).toBeGreaterThan(-1e-9);
      expect(beside.cumulative[i] - beside.cumulative[i - 1], say).toBeGreaterThan(-1e-9);
    }
  });
}
