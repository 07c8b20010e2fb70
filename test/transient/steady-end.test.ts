import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { FeedCourse } from "../../src/model/duty.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { steadyState } from "../../src/reaction/steady.js";
import { transient } from "../../src/transient/transient.js";
import { chemistryOf, dutyOf, plantOf, power, type Sketch, value } from "../reaction/make.js";

const second = `chemistry: Second order, then on
format: 1
species: {A: {}, B: {}, P: {}, S: {}}
constants: {k1: 0.2 L/mol/min, k2: 0.05 L/mol/min}
reactions:
  - {equation: A + B -> P, rate: mass-action, constant: [k1]}
  - {equation: P + B -> S, rate: mass-action, constant: [k2]}
`;

const bodies: Record<string, string> = {
  "stirred with a corner": "stirred, volume: 200 L, stagnant: {volume: 60 L, exchange: 1 L/min}",
  tubular: "tubular, volume: 200 L",
  dispersed: "dispersed, volume: 200 L, peclet: 20",
  "dispersed past pockets": "dispersed, volume: 200 L, peclet: 8, stagnant: {volume: 50 L, exchange: 2 L/min}",
  laminar: "laminar, volume: 200 L",
  cascade: "cascade, volume: 200 L, tanks: 2.5",
};

describe("every kind of body", () => {
  test.each(Object.entries(bodies))("%s: an upset leaves a steady state and comes back to it", (_, body) => {
    const net = parseNetwork(
      `network: A vessel\nformat: 1\nfeeds: {feed: {flow: 10 L/min, to: body}}\ncompartments:\n  body: {kind: ${body}, to: tank}\n  tank: {kind: stirred, volume: 50 L, to: product}\noutlets: [product]\n`,
      { path: "n.yaml" },
    );
    const read = parseDuty(
      "duty: D\nformat: 1\nchemistry: c.yaml\nfeeds: {feed: {A: 1 mol/L, B: {from: 1.5 mol/L, to: 0.5 mol/L, start: 4 min, lasting: 8 min}}}\n",
      { path: "d.yaml", read: () => second },
    );
    expect([...net.problems, ...read.problems]).toEqual([]);
    const plant = net.document && compile(net.document).plant;
    if (!plant || !read.document) throw new Error("unread");
    const duty = read.document;
    const run = transient(plant, duty.chemistry, duty, [0, 120, 240, 2400, 240_000], { at: ["body"] });
    const still = steadyState(plant, duty.chemistry, duty).outlets[0].concentrations;
    const values = run.outlets[0].values;
    // Of laminar flow a part that falls with the square of time is still to come; nothing else is.
    const late = body.startsWith("laminar") ? 1e-4 : 1e-8;
    for (let i = 0; i < 4; i++) {
      expect(Math.abs(values[i] - still[i]) / 1000).toBeLessThan(1e-8);
      expect(Math.abs(values[4 + i] - still[i]) / 1000).toBeLessThan(1e-8);
      expect(Math.abs(values[16 + i] - still[i]) / 1000).toBeLessThan(late);
    }
    expect(Math.abs(values[12] - still[0]) / 1000).toBeGreaterThan(1e-4);
    for (const c of run.balance?.closure ?? [1]) expect(Math.abs(c)).toBeLessThan(1e-9);
    expect(run.balance?.conserved).toBeLessThan(1e-9);
  });
});

/** A path from feed to outlet through some bodies, and closed circulations laid over it: balanced whatever the draws. */
const sketch: fc.Arbitrary<Sketch> = fc
  .record({
    bodies: fc.array(fc.record({ tube: fc.boolean(), volume: fc.double({ min: 0.2, max: 5, noNaN: true }) }), {
      minLength: 2,
      maxLength: 5,
    }),
    rings: fc.array(
      fc.record({
        along: fc.array(fc.nat(5), { minLength: 2, maxLength: 3 }),
        flow: fc.double({ min: 0.05, max: 3, noNaN: true }),
      }),
      { maxLength: 2 },
    ),
  })
  .map(({ bodies: drawn, rings }) => {
    const names = drawn.map((b, i) => `${b.tube ? "tube" : "cell"}${i}`);
    const pick = (tube: boolean) =>
      Object.fromEntries(drawn.flatMap((b, i) => (b.tube === tube ? [[names[i], b.volume]] : [])));
    const path = ["feed", ...names, "out"];
    const links = path.slice(1).map((to, i): [string, string, number] => [path[i], to, 1]);
    for (const { along, flow } of rings) {
      const stops = along.map((k) => names[k % names.length]);
      for (const [i, from] of stops.entries()) links.push([from, stops[(i + 1) % stops.length], flow]);
    }
    return { cells: pick(false), tubes: pick(true), links };
  });

test("random networks: balances close through start-up and upset, and the end is the steady state", () => {
  const chemistry = chemistryOf(["A", "B", "P", "S"], { k1: 3, k2: 0.4 }, [
    power(4, [1, 1, 0, 0], [-1, -1, 1, 0]),
    power(5, [0, 1, 1, 0], [0, -1, -1, 1]),
  ]);
  const course: FeedCourse = { is: "upset", to: value(2.5), start: 0.7, lasting: 1.1 };
  fc.assert(
    fc.property(sketch, fc.boolean(), (drawn, disturbed) => {
      const plant = plantOf(drawn);
      const still = dutyOf(chemistry, { feed: { A: 1, B: 1.4 } });
      const feed = still.feeds.get("feed");
      const duty =
        disturbed && feed
          ? { ...still, feeds: new Map([["feed", { ...feed, courses: new Map([["A", course]]) }]]) }
          : still;
      const volume = Object.values({ ...drawn.cells, ...drawn.tubes }).reduce((a, b) => a + b, 0);
      const run = transient(plant, chemistry, duty, [0, 3, 12 * volume], { at: [] });
      expect(run.stopped).toBeUndefined();
      for (const c of run.balance?.closure ?? [1]) expect(Math.abs(c)).toBeLessThan(1e-9);
      expect(run.balance?.conserved).toBeLessThan(1e-9);
      expect(run.outlets[0].values.every((c) => c >= 0)).toBe(true);
      const s = steadyState(plant, chemistry, still);
      for (let i = 0; i < 4; i++) {
        expect(Math.abs(run.outlets[0].values[8 + i] - s.outlets[0].concentrations[i])).toBeLessThan(2e-4);
      }
    }),
    { numRuns: 12, seed: 11 },
  );
});
