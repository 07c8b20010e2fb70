import fc from "fast-check";
import { expect, test } from "vitest";
import type { Plant } from "../../src/compile/plant.js";
import { parseChemistry } from "../../src/parse/chemistry.js";
import { parseDuty } from "../../src/parse/duty.js";
import { steadyState } from "../../src/reaction/steady.js";
import { moments } from "../../src/simulate/moments.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { randomNetwork } from "../simulate/random-network.js";
import { plantOf } from "./parts.js";
import { splitOff } from "./split.js";

const seeds = fc.nat(2 ** 31 - 1);

/** A random network whole, and with some of its bodies in a part. */
const both = fc.record({ seed: seeds, bits: fc.integer({ min: 1, max: 255 }) }).map(({ seed, bits }) => {
  const text = randomNetwork(seed);
  const library = splitOff(text, (name) => ((bits >> Number(name.slice(1))) & 1) === 1);
  return { text, library };
});

const runs = { numRuns: 40, seed: 20261201 };

const close = (a: number, b: number, within: number): boolean =>
  a === b || Math.abs(a - b) <= within * Math.max(Math.abs(a), Math.abs(b));

/** Through-flow and volume of every body under its name in the whole network. */
const bodies = ({ nodes }: Plant): Map<string, readonly [number, number]> =>
  new Map(nodes.filter((n) => n.volume > 0).map((n) => [n.name.replace(/^core\./, ""), [n.inflow, n.volume]]));

test("a description split into a part leaves flows and volumes alone", () => {
  fc.assert(
    fc.property(both, ({ text, library }) => {
      fc.pre(library["core.yaml"].includes("kind"));
      const whole = bodies(plantOf({ "main.yaml": text }));
      const split = bodies(plantOf(library));
      expect([...split.keys()].sort()).toEqual([...whole.keys()].sort());
      for (const [name, [flow, volume]] of whole) {
        const [other, same] = split.get(name) ?? [];
        expect(close(flow, other ?? Number.NaN, 1e-11)).toBe(true);
        expect(same).toBe(volume);
      }
    }),
    runs,
  );
});

test("... and moments and the tracer curve", () => {
  fc.assert(
    fc.property(both, ({ text, library }) => {
      fc.pre(library["core.yaml"].includes("kind"));
      const [whole, split] = [plantOf({ "main.yaml": text }), plantOf(library)];
      const [a, b] = [whole, split].map((plant) => moments(plant, plant.feeds[0].node));
      for (const [i, { node }] of whole.outlets.entries()) {
        const [m, n] = [a[node], b[split.outlets[i].node]];
        expect(close(m.mean, n.mean, 1e-10)).toBe(true);
        expect(close(m.variance, n.variance, 1e-9)).toBe(true);
      }
      const times = Float64Array.from({ length: 9 }, (_, i) => 30 * 3 ** i);
      const [c, d] = [whole, split].map((plant) => tracerResponse(plant, { at: "feed", form: "step" }, times));
      for (const [i, { value }] of c.readings.entries()) {
        value.forEach((x, k) => {
          expect(Math.abs(x - d.readings[i].value[k])).toBeLessThan(1e-9);
        });
      }
    }),
    { ...runs, numRuns: 15 },
  );
});

test("... and the steady state of a second-order reaction", () => {
  const chemistry = parseChemistry(
    "chemistry: C\nformat: 1\nspecies: {A: {}, B: {}}\nconstants: {k: 0.05 L/mol/min}\nreactions: [{equation: 2 A -> B, rate: k * A^2}]\n",
  ).document;
  const duty = parseDuty("duty: D\nformat: 1\nchemistry: c.yaml\nfeeds: {feed: {A: 1 mol/L}}\n", {
    read: () =>
      "chemistry: C\nformat: 1\nspecies: {A: {}, B: {}}\nconstants: {k: 0.05 L/mol/min}\nreactions: [{equation: 2 A -> B, rate: k * A^2}]\n",
  }).document;
  if (!duty) throw new Error("no duty");
  fc.assert(
    fc.property(both, ({ text, library }) => {
      fc.pre(library["core.yaml"].includes("kind"));
      const [a, b] = [plantOf({ "main.yaml": text }), plantOf(library)].map((plant) => {
        const { outlets } = steadyState(plant, chemistry, duty);
        return outlets.flatMap((o) => [...o.concentrations]);
      });
      a.forEach((x, i) => {
        expect(close(x, b[i], 1e-8)).toBe(true);
      });
    }),
    { ...runs, numRuns: 10 },
  );
});
