import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { partingsOf, plantFollowing } from "../../src/compile/sends.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { runChecks } from "../../src/simulate/checks.js";
import { exact } from "../../src/simulate/exact.js";
import { laplace } from "../../src/simulate/laplace.js";
import { moments } from "../../src/simulate/moments.js";
import { ode } from "../../src/simulate/ode.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { trialResponse } from "../../src/simulate/trial.js";
import { peakOf, plantOf } from "./plants.js";

/** An aeration tank whose settler returns most solids: of what passes, 1 % overflows and 4 % is wasted. */
const sludge = (sends: string) => `network: Tank and settler
format: 1
feeds: {feed: {flow: 10 m3/h, to: tank}}
compartments:
  tank: {kind: stirred, volume: 100 m3, to: settler}
  settler:
    kind: junction
    to: {tank: 5 m3/h, waste: 0.3 m3/h, effluent: rest}
    sends: {solids: ${sends}}
outlets: [effluent, waste]
checks:
  - {mean-time: all, equals: 10 h, within: 1e-9}
  - {mean-time: waste, follows: solids, equals: 100 m3 / 15 m3/h / 0.05, within: 1e-9}
`;
const usual = "{effluent: 1 %, waste: 4 %, tank: rest}";

describe("solids in a tank with a settler", () => {
  const plant = plantFollowing(plantOf(sludge(usual)), "solids");
  const hours = Float64Array.of(0, 10, 100, 400).map((t) => 3600 * t);

  test.each([exact, ode, laplace])("stay 1 / 5 % passes, and leave by their own shares: $name", (engine) => {
    const seen = tracerResponse(plant, { at: "feed", form: "pulse" }, hours, { engine });
    const stay = 100 / 15 / 0.05; // h: each pass takes V/Q, 5 % of it is the last
    const [effluent, waste] = seen.readings;
    hours.forEach((s, i) => {
      const passing = (15 * Math.exp(-s / 3600 / stay)) / 100 / 3600; // 1/s of what was put in passes the settler
      expect(waste.value[i] / ((0.04 * passing * 10) / 0.3)).toBeCloseTo(1, 9);
      expect(effluent.value[i] / ((0.01 * passing * 10) / 9.7)).toBeCloseTo(1, 9);
    });
    expect(waste.moments.share).toBeCloseTo(0.8, 12);
    expect(effluent.moments.mean / 3600).toBeCloseTo(stay, 9);
    expect(seen.balance.closure).toBeLessThan(1e-9);
  });

  test("checks of mean times keep to the liquid, but for those that follow a substance", () => {
    expect(runChecks(plantOf(sludge(usual))).map((c) => c.holds)).toEqual([true, true]);
    expect(partingsOf(plantOf(sludge(usual))).map((p) => [p.to, p.share])).toEqual([
      ["tank", expect.closeTo(0.95, 12)],
      ["waste", 0.04],
      ["effluent", 0.01],
    ]);
  });

  test("a trial follows them", () => {
    const { document } = parseTrial(
      "trial: T\nformat: 1\ntracer: {follows: solids}\ninjection: {at: feed, pulse: 1 kg}\nreadings: [{at: waste}]\n",
    );
    if (!document) throw new Error("no trial");
    const [seen] = trialResponse(plantOf(sludge(usual)), document, [{ time: hours }]);
    const [waste] = tracerResponse(plant, { at: "feed", form: "pulse" }, hours, { at: ["waste"] }).readings.slice(1);
    seen.forEach((c, i) => {
      expect(c).toBeCloseTo(waste.value[i] / (10 / 3600), 12);
    });
  });
});

test("shares beyond 100 %, and substances where no liquid goes, are refused for any values", () => {
  const { document } = parseNetwork(
    sludge("{effluent: lost, waste: 4 %, tank: rest}").replace("feeds:", "parameters: {lost: {value: 1 %}}\nfeeds:"),
  );
  if (!document) throw new Error("no network");
  expect(compile(document, { lost: 0.97 }).problems.map((p) => p.code)).toEqual(["sends-sum"]);
  expect(compile(document, { lost: -0.1 }).problems.map((p) => p.code)).toEqual(["sends-range"]);
});

/** Bodies in a row, splits between them with recycles; where `parts` is given a substance divides by it. */
const vessel = fc.record({
  volumes: fc.array(fc.double({ min: 1, max: 40, noNaN: true }), { minLength: 3, maxLength: 5 }),
  tube: fc.boolean(),
  back: fc.double({ min: 0.1, max: 0.7, noNaN: true }),
  side: fc.double({ min: 0.05, max: 0.25, noNaN: true }),
  parts: fc.tuple(fc.double({ min: 0, max: 0.8, noNaN: true }), fc.double({ min: 0.01, max: 0.19, noNaN: true })),
});
type Vessel = typeof vessel extends fc.Arbitrary<infer T> ? T : never;

function plantWith({ volumes, tube, back, side }: Vessel, parts: readonly [number, number]) {
  const n = volumes.length;
  const bodies = volumes.map((v, i) => {
    const last = i === n - 1;
    const kind = tube && i === 1 ? "tubular" : "stirred";
    const to = last ? `{n0: ${back}, side: ${side}, out: rest}` : `n${i + 1}`;
    const sends = last ? `, sends: {solids: {n0: ${parts[0]}, side: ${parts[1]}, out: rest}}` : "";
    const exchange = i === 0 ? ", exchange: {corner: 1 L/min}" : "";
    return `  n${i}: {kind: ${kind}, volume: ${v} L, to: ${to}${sends}${exchange}}`;
  });
  return plantFollowing(
    plantOf(
      `network: V\nformat: 1\nfeeds: {feed: {flow: 2 L/min, to: n0}}\ncompartments:\n${bodies.join("\n")}\n  corner: {kind: stirred, volume: 3 L}\noutlets: [side, out]\n`,
    ),
    "solids",
  );
}

test("random vessels: all that is put in leaves, engines agree, and shares as the liquid's change nothing", () => {
  fc.assert(
    fc.property(vessel, (v) => {
      const plant = plantWith(v, v.parts);
      const entry = plant.entry.get("feed") as number;
      const all = moments(plant, entry);
      expect(plant.outlets.reduce((sum, o) => sum + all[o.node].share, 0)).toBeCloseTo(1, 11);
      const turn = plant.volume.active / plant.feeds[0].flow;
      const times = Float64Array.from([0, 0.3, 1, 2], (x) => x * turn);
      const [a, b] = [exact, ode].map((engine) =>
        tracerResponse(plant, { at: "feed", form: "pulse" }, times, { engine, at: ["n0"] }),
      );
      expect(a.balance.closure).toBeLessThan(1e-9);
      a.readings.forEach((r, k) => {
        r.value.forEach((c, i) => {
          expect(Math.abs(c - b.readings[k].value[i])).toBeLessThan(1e-8 * Math.max(peakOf(r.value), 1 / turn));
        });
      });
      const same = plantWith(v, [v.back, v.side]);
      const liquid = { ...same, flow: same.flow, follows: undefined };
      const [own, plain] = [same, liquid].map((p) => moments(p, entry));
      for (const o of same.outlets) {
        expect(own[o.node].mean / plain[o.node].mean).toBeCloseTo(1, 9);
        expect(own[o.node].share / plain[o.node].share).toBeCloseTo(1, 9);
      }
    }),
    { numRuns: 25, seed: 11 },
  );
});
