import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { parseNetwork } from "../../src/parse/network.js";
import { RefusedError } from "../../src/problems/refused.js";
import { exact } from "../../src/simulate/exact.js";
import { laplace } from "../../src/simulate/laplace.js";
import { ode } from "../../src/simulate/ode.js";
import type { AnyEngine } from "../../src/simulate/trace.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { peakOf, plantOf } from "./plants.js";

const minutes = (...t: number[]) => Float64Array.from(t, (m) => 60 * m);
const closed = (...bodies: string[]) =>
  plantOf(`network: Closed\nformat: 1\ncompartments:\n${bodies.map((b) => `  ${b}\n`).join("")}`);

/** c V / amount at one place. */
const curve = (
  plant: ReturnType<typeof closed>,
  into: string,
  at: string,
  times: Float64Array,
  engine: AnyEngine = exact,
) => tracerResponse(plant, { at: into, form: "pulse" }, times, { engine, at: [at] }).readings[0];

const engines = [exact, ode, laplace] as const;

describe("a closed vessel", () => {
  test("keeps in a flask what is put into it", () => {
    const flask = closed("flask: {kind: stirred, volume: 2 L}");
    for (const c of curve(flask, "flask", "flask", minutes(0, 1, 1000)).value) expect(c).toBeCloseTo(1, 12);
  });

  test.each(engines)("two tanks that exchange: $name", (engine) => {
    const plant = closed("a: {kind: stirred, volume: 2 L, exchange: {b: 1 L/min}}", "b: {kind: stirred, volume: 3 L}");
    const t = minutes(0, 0.5, 1, 2, 5, 20);
    // V dc/dt = q (other - own): the difference of the two decays with q (1/Va + 1/Vb)
    const fade = (s: number) => Math.exp(-(s / 60) * (1 / 2 + 1 / 3));
    const seen = tracerResponse(plant, { at: "a", form: "pulse" }, t, { engine, at: ["a", "b"] });
    t.forEach((s, i) => {
      expect(seen.readings[0].value[i]).toBeCloseTo(1 + (3 / 2) * fade(s), 9);
      expect(seen.readings[1].value[i]).toBeCloseTo(1 - fade(s), 9);
    });
    expect(seen.balance.left).toBe(0);
    expect(seen.balance.closure).toBeLessThan(1e-9);
  });

  test.each(engines)("a tank with a tube on total return, by the method of steps: $name", (engine) => {
    const plant = closed(
      "tank: {kind: stirred, volume: 40 L, to: {pipe: 4 L/min}}",
      "pipe: {kind: tubular, volume: 8 L, to: tank}",
    );
    const [tau, delay] = [10, 2];
    const first = (t: number) => 1.2 * Math.exp(-t / tau);
    // from 2 to 4 min what left in the first 2 min comes back
    const second = (t: number) => first(t) + ((t - delay) / tau) * first(t - delay);
    const { value } = curve(plant, "tank", "tank", minutes(0, 1, 1.99, 2, 3, 3.9), engine);
    [first(0), first(1), first(1.99), second(2), second(3), second(3.9)].forEach((c, i) => {
      expect(value[i]).toBeCloseTo(c, 9);
    });
  });

  test("in a ring of one tube a pulse goes round for ever, undispersed", () => {
    const plant = closed("ring: {kind: tubular, volume: 8 L, to: {ring: 4 L/min}}");
    const { spikes, value } = curve(plant, "ring", "ring", minutes(0, 9));
    expect(spikes.map((s) => s.time / 60)).toEqual([2, 4, 6, 8].map((t) => expect.closeTo(t, 12)));
    for (const s of spikes) expect(s.area).toBeCloseTo(120, 9); // V/Q: one whole turn
    expect(peakOf(value)).toBe(0);
    expect(() => curve(plant, "ring", "ring", minutes(0, 30_000))).toThrow(RefusedError);
    try {
      curve(plant, "ring", "ring", minutes(0, 30_000));
    } catch (e) {
      expect((e as RefusedError).problems.map((p) => p.code)).toEqual(["too-many-passes"]);
    }
  });

  test("a loop with axial dispersion ends at amount over volume", () => {
    const plant = closed(
      "tank: {kind: stirred, volume: 10 L, to: {pipe: 4 L/min}}",
      "pipe: {kind: dispersed, volume: 8 L, peclet: 20, to: tank}",
    );
    const seen = tracerResponse(plant, { at: "pipe", form: "pulse" }, minutes(0.5, 2, 10, 60), {
      at: ["tank", "pipe"],
    });
    for (const r of seen.readings) expect(r.value[3]).toBeCloseTo(1, 8);
    expect(seen.balance.closure).toBeLessThan(1e-9);
  });
});

/** A ring of bodies with chords: every place sends what it gets, two of them by a fixed flow. */
const ring = fc
  .record({
    volumes: fc.array(fc.double({ min: 5, max: 50, noNaN: true }), { minLength: 3, maxLength: 7 }),
    tube: fc.boolean(),
    round: fc.double({ min: 1, max: 10, noNaN: true }),
    share: fc.double({ min: 0.1, max: 0.9, noNaN: true }),
    side: fc.double({ min: 0.1, max: 5, noNaN: true }),
  })
  .map(({ volumes, tube, round, share, side }) => {
    const n = volumes.length;
    const bodies = volumes.map((v, i) => {
      const kind = tube && i === 1 ? "tubular" : "stirred";
      const to = i === 0 ? `{n1: ${round} L/min}` : i === 2 ? `{n0: ${share}, n${3 % n}: rest}` : `n${(i + 1) % n}`;
      const exchange = i === 0 ? `, exchange: {side: ${side} L/min}` : "";
      return `n${i}: {kind: ${kind}, volume: ${v} L, to: ${n === 3 && i === 2 ? "n0" : to}${exchange}}`;
    });
    return closed(...bodies, "side: {kind: stirred, volume: 4 L}");
  });

test("random closed networks: the amount stays, engines agree", () => {
  fc.assert(
    fc.property(ring, (plant) => {
      const { active } = plant.volume;
      const turn = active / Math.max(...plant.columns.inflow);
      const times = Float64Array.from([0, 0.2, 1, 3], (x) => x * turn);
      const at = ["n0", "n1", "n2", "side"];
      const [a, b] = [exact, ode].map((engine) =>
        tracerResponse(plant, { at: "n2", form: "pulse" }, times, { engine, at }),
      );
      expect(a.balance.closure).toBeLessThan(1e-9);
      expect(b.balance.closure).toBeLessThan(1e-9);
      const peak = Math.max(...a.readings.map((r) => peakOf(r.value)));
      a.readings.forEach((r, k) => {
        r.value.forEach((c, i) => {
          expect(Math.abs(c - b.readings[k].value[i])).toBeLessThan(1e-8 * peak);
        });
      });
    }),
    { numRuns: 20, seed: 7 },
  );
});

test("many passes are taken together", () => {
  const plant = closed(
    "tank: {kind: stirred, volume: 40 L, to: {pipe: 4 L/min}}",
    "pipe: {kind: tubular, volume: 0.1 L, to: tank}",
  );
  const seen = tracerResponse(plant, { at: "pipe", form: "pulse" }, minutes(0, 1, 1000), { at: ["tank"] });
  expect(seen.engine).toBe("laplace");
  expect(seen.readings[0].value[1]).toBeCloseTo(curve(plant, "pipe", "tank", minutes(0, 1)).value[1], 9);
  expect(seen.readings[0].value[2]).toBeCloseTo(1, 9);
  expect(seen.balance.closure).toBeLessThan(1e-9);
});

test("flows that do not balance, or that nothing sets, are refused with what is out of balance", () => {
  const problemsOf = (...bodies: string[]) =>
    parseNetwork(`network: Closed\nformat: 1\ncompartments:\n${bodies.map((b) => `  ${b}\n`).join("")}`).problems;
  const [off, ...more] = problemsOf(
    "a: {kind: stirred, volume: 1 L, to: {b: 4 L/min}}",
    "b: {kind: stirred, volume: 1 L, to: {a: 3 L/min}}",
  );
  expect(off.code).toBe("closed-unbalanced");
  expect(off.message).toBe("3 L/min arrives at 'a', but it sends 4 L/min");
  expect(more.map((p) => p.code)).toEqual(["closed-unbalanced"]);
  const open = problemsOf("a: {kind: stirred, volume: 1 L, to: b}", "b: {kind: stirred, volume: 1 L, to: a}");
  expect(open.map((p) => p.code)).toEqual(["closed-flow-open"]);
});
