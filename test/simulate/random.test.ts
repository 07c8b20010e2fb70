import { expect, test } from "vitest";
import { moments } from "../../src/simulate/moments.js";
import { ode } from "../../src/simulate/ode.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { peakOf, plantOf } from "./plants.js";
import { randomMixed } from "./random-mixed.js";

/** `npm run fuzz -- --networks N --seed S` asks for other numbers. */
const networks = Number(process.env.BACKMIX_NETWORKS ?? 20);
const seed = Number(process.env.BACKMIX_SEED ?? 1);
/** Each tenth may have 12 compartments, the others 4; more take minutes. */
const mostOf = (n: number): number => (n % 10 === 9 ? 12 : 4);
const inOneTest = 2;

const numbers = Array.from({ length: Math.ceil(networks / inOneTest) }, (_, k) => k * inOneTest);

test.each(numbers)(
  "random networks of all kinds from number %i on: two engines agree; all leaves after V/Q; F rises; tracer is kept",
  (first) => {
    for (let n = first; n < Math.min(networks, first + inOneTest); n++) {
      const text = randomMixed((seed * 100_003 + n) * 7919 + 13, mostOf(n));
      const plant = plantOf(text);
      const { flow } = plant.feeds[0];
      const unit = plant.volume.active / flow;
      const all = moments(plant, plant.entry.get("feed") as number);
      const reached = plant.outlets.filter((o) => all[o.node].share > 0);
      const share = reached.reduce((sum, o) => sum + all[o.node].share, 0);
      const mean = reached.reduce((sum, o) => sum + all[o.node].share * all[o.node].mean, 0);
      const times = Float64Array.from({ length: 41 }, (_, i) => (1.2 * unit * i) / 40);
      const own = tracerResponse(plant, { at: "feed", form: "pulse" }, times);
      // Where integration is the first way, its own is all that is fast.
      const other =
        own.engine === "ode" ? own : tracerResponse(plant, { at: "feed", form: "pulse" }, times, { engine: ode });
      const say = `network ${n} of seed ${seed}\n${text}`;
      expect(Math.abs(share - 1), say).toBeLessThan(1e-12);
      expect(Math.abs(mean / unit - 1), say).toBeLessThan(1e-11);
      for (const { balance, stopped } of [own, other]) {
        expect(stopped, say).toBeUndefined();
        expect(balance.closure, say).toBeLessThan(1e-9);
      }
      own.readings.forEach((reading, r) => {
        const beside = other.readings[r];
        const peak = Math.max(peakOf(reading.value), 1e-9 / unit);
        expect(beside.spikes.length, say).toBe(reading.spikes.length);
        for (let i = 0; i < times.length; i++) {
          expect(Math.abs(reading.value[i] - beside.value[i]) / peak, say).toBeLessThan(1e-6);
          expect(Math.abs(reading.cumulative[i] - beside.cumulative[i]), say).toBeLessThan(1e-6);
          if (i > 0) expect(beside.cumulative[i] - beside.cumulative[i - 1], say).toBeGreaterThan(-1e-9);
        }
      });
    }
  },
  300_000,
);
