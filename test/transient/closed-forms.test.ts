import { describe, expect, test } from "vitest";
import type { Duty, FeedCourse } from "../../src/model/duty.js";
import { steadyState } from "../../src/reaction/steady.js";
import { transient } from "../../src/transient/transient.js";
import { chemistryOf, decay, dutyOf, plantOf, value } from "../reaction/make.js";
import { tubeRow } from "./make.js";

const times = (until: number, count = 41): Float64Array =>
  Float64Array.from({ length: count }, (_, k) => (until * k) / (count - 1));

/** A tank of 2 m3 fed with 1 m3/s. */
const tank = plantOf({
  cells: { tank: 2 },
  links: [
    ["feed", "tank", 1],
    ["tank", "out", 1],
  ],
});

/** A duty that also says what is held at the start, or what goes on in time. */
const held = (duty: Duty, contents: Record<string, Record<string, number>>): Duty => ({
  ...duty,
  contents: {
    at: duty.at,
    levels: new Map(
      Object.entries(contents).map(([place, brings]) => [
        place,
        {
          at: duty.at,
          species: new Map(Object.entries(brings).map(([s, c]) => [s, { at: duty.at, value: value(c) }])),
        },
      ]),
    ),
  },
});

const upset = (duty: Duty, feed: string, of: string, course: FeedCourse): Duty => {
  const own = duty.feeds.get(feed);
  if (!own) throw new Error(feed);
  return { ...duty, feeds: new Map([...duty.feeds, [feed, { ...own, courses: new Map([[of, course]]) }]]) };
};

describe("a stirred tank from empty", () => {
  test("first order: c = c0 / (1 + k tau) (1 - exp(-(1 + k tau) t / tau))", () => {
    const chemistry = decay(1.5, 1);
    const run = transient(tank, chemistry, dutyOf(chemistry, { feed: { A: 3 } }), times(10), { at: ["tank"] });
    run.times.forEach((t, k) => {
      expect(Math.abs(run.outlets[0].values[k] - (3 / 4) * -Math.expm1(-2 * t))).toBeLessThan(1e-8);
    });
    expect(Math.abs(run.balance?.closure[0] ?? 1)).toBeLessThan(1e-9);
    expect(run.places[0].values).toEqual(run.outlets[0].values);
  });

  test("second order: a hyperbolic tangent", () => {
    const [k2, c0, tau] = [4, 2, 2];
    const chemistry = decay(k2, 2);
    const run = transient(tank, chemistry, dutyOf(chemistry, { feed: { A: c0 } }), times(8), { at: [] });
    // c' = (c0 - c)/tau - k c^2: roots r1 > 0 > r2; (c - r1)/(c - r2) decays with k (r1 - r2).
    const root = Math.sqrt(1 / tau ** 2 + (4 * k2 * c0) / tau);
    const [r1, r2] = [(-1 / tau + root) / (2 * k2), (-1 / tau - root) / (2 * k2)];
    run.times.forEach((t, k) => {
      const ratio = (r1 / r2) * Math.exp(-k2 * (r1 - r2) * t);
      expect(Math.abs(run.outlets[0].values[k] - (r1 - r2 * ratio) / (1 - ratio))).toBeLessThan(1e-8);
    });
  });
});

describe("a tube", () => {
  const plant = plantOf({
    tubes: { tube: 2 },
    links: [
      ["feed", "tube", 1],
      ["tube", "out", 1],
    ],
  });

  test("from empty: nothing for one space time, then second order, at once and for good", () => {
    const chemistry = decay(0.7, 2);
    const run = transient(plant, chemistry, dutyOf(chemistry, { feed: { A: 3 } }), [0, 1.9, 2 - 1e-9, 2, 2.1, 7], {
      at: [],
    });
    const out = 3 / (1 + 0.7 * 3 * 2);
    [0, 0, 0, out, out, out].forEach((c, k) => {
      expect(Math.abs(run.outlets[0].values[k] - c)).toBeLessThan(1e-10);
    });
    expect(Math.abs(run.balance?.closure[0] ?? 1)).toBeLessThan(1e-9);
  });

  test("filled: what was there leaves after it has reacted for as long as it was on its way", () => {
    const chemistry = decay(0.7, 2);
    const duty = held(dutyOf(chemistry, { feed: { A: 3 } }), { all: { A: 5 } });
    const run = transient(plant, chemistry, duty, times(4), { at: [] });
    run.times.forEach((t, k) => {
      const c = t < 2 ? 5 / (1 + 0.7 * 5 * t) : 3 / (1 + 0.7 * 3 * 2);
      expect(Math.abs(run.outlets[0].values[k] - c)).toBeLessThan(1e-8);
    });
    expect(Math.abs(run.balance?.closure[0] ?? 1)).toBeLessThan(1e-9);
  });

  test("an upset through a tube and a tank: the front stays a front", () => {
    const row = tubeRow();
    const chemistry = decay(0.5, 1);
    const course: FeedCourse = { is: "upset", to: value(4), start: 1, lasting: 0.25 };
    const duty = upset(dutyOf(chemistry, { feed: { A: 1 } }), "feed", "A", course);
    const run = transient(row, chemistry, duty, times(20, 201), { at: ["tube"] });
    const still = steadyState(row, chemistry, duty);
    const base = still.outlets[0].concentrations[0];
    // 3 above for a quarter: after a delay of 2 s with decay, a tank of 2 s.
    const rate = 1 / 2 + 0.5;
    const gain = (3 * Math.exp(-1)) / (2 * rate);
    run.times.forEach((t, k) => {
      const since = (u: number): number => (t >= u ? -Math.expm1(-rate * (t - u)) : 0);
      expect(Math.abs(run.outlets[0].values[k] - base - gain * (since(3) - since(3.25)))).toBeLessThan(1e-8);
      const inside = t >= 3 && t < 3.25 ? 4 : 1;
      expect(Math.abs(run.places[0].values[k] - inside * Math.exp(-1))).toBeLessThan(1e-9);
    });
    expect(run.start).toBe("steady");
    expect(Math.abs(run.balance?.closure[0] ?? 1)).toBeLessThan(1e-9);
  });
});

describe("a batch", () => {
  const flask = plantOf({ cells: { flask: 1 }, links: [] });

  test.each([
    ["second order", 2, (t: number) => 2 / (1 + 0.3 * 2 * t)],
    ["half order, which runs dry", 0.5, (t: number) => Math.max(0, Math.sqrt(2) - 0.15 * t) ** 2],
    ["zero order, which stops short", 0, (t: number) => Math.max(0, 2 - 0.3 * t)],
  ])("%s", (_, order, form) => {
    const chemistry = decay(0.3, order);
    const run = transient(flask, chemistry, held(dutyOf(chemistry, {}), { flask: { A: 2 } }), times(20), {
      at: ["flask"],
    });
    expect(run.stopped).toBeUndefined();
    run.times.forEach((t, k) => {
      expect(Math.abs(run.places[0].values[k] - form(t))).toBeLessThan(1e-8);
    });
    expect(Math.abs(run.balance?.closure[0] ?? 1)).toBeLessThan(1e-9);
  });

  test("Michaelis-Menten by Lambert's W", () => {
    // S = Km W(S0/Km exp((S0 - v t)/Km)); S. Schnell, C. Mendoza, J. theor. Biol. 187 (1997) 207-212 (from memory)
    const [v, km, s0] = [1.3, 0.4, 2];
    const chemistry = chemistryOf(["S", "P"], { v, km }, [
      {
        makes: [-1, 1],
        rate: (env) => (env[2] * env[0]) / (env[3] + env[0]),
        gradient(env, out) {
          out[0] = (env[2] * env[3]) / (env[3] + env[0]) ** 2;
          out[1] = 0;
        },
      },
    ]);
    const run = transient(flask, chemistry, held(dutyOf(chemistry, {}), { all: { S: s0 } }), times(4), {
      at: ["flask"],
    });
    run.times.forEach((t, k) => {
      let w = 1; // w e^w = x by Newton's method on w + ln w = ln x
      const log = Math.log(s0 / km) + (s0 - v * t) / km;
      for (let i = 0; i < 60; i++) w = Math.max(w - (w + Math.log(w) - log) / (1 + 1 / w), w / 10);
      expect(Math.abs(run.places[0].values[2 * k] - km * w)).toBeLessThan(1e-8);
      expect(Math.abs(run.places[0].values[2 * k + 1] - (s0 - km * w))).toBeLessThan(1e-8);
    });
    expect(run.balance?.conserved).toBeLessThan(1e-12);
  });
});
