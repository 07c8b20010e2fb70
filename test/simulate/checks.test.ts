import { expect, test } from "vitest";
import { runChecks } from "../../src/simulate/checks.js";
import { plantOf } from "./plants.js";

const vessel = (checks: readonly string[]): string => `network: Two feeds, a bypass, a corner, a dead volume
format: 1
feeds:
  main: {flow: 6 L/min, to: {a: rest, out: 50 %}}
  side: {flow: 2 L/min, to: a}
compartments:
  a: {kind: stirred, volume: 40 L, to: {b: 4 L/min, out: rest}, exchange: {s: 1 L/min}}
  s: {kind: stirred, volume: 10 L}
  b: {kind: tubular, volume: 8 L, to: {a: 25 %, drain: rest}}
  d: {kind: dead, volume: 5 L}
outlets: [out, drain]
checks:
${checks.map((c) => `  - {${c}}`).join("\n")}
`;

/**
 * Worked out by hand. 3 + 2 + 1 L/min pass through a, which with its corner keeps them 50/6 = 25/3 min, 4 L/min through b, 2 min.
 * From a 1/3 goes out, 1/2 by way of b to the drain, 1/6 by way of b back to a: so a round trip of 31/3 min is made 1/5 times
 * before leaving. Drain: 6/5 of 31/3 = 12.4 min. Out: 25/3 + 1/5 of 31/3 = 10.4 min for 2 L/min, nothing for the 3 L/min that
 * slip past: 4.16 min. All: (5 x 4.16 + 3 x 12.4) / 8 = 58 L / 8 L/min.
 */
test("what holds", () => {
  const results = runChecks(
    plantOf(
      vessel([
        "volume: all, equals: 63 L",
        "volume: a, equals: 0.04 m3",
        "volume: d, equals: 5 L, within: 0 %",
        "flow: main, equals: 6 L/min",
        "flow: a, equals: 6 L/min",
        "flow: drain, equals: 3 L/min",
        "flow: out, equals: 5 L/min",
        "mean-time: all, equals: 7.25 min, within: 1e-12",
        "mean-time: drain, equals: 12.4 min, within: 1e-12",
        "mean-time: out, equals: 4.16 min, within: 1e-12",
      ]),
    ),
  );
  expect(results.map((r) => r.holds)).toEqual(results.map(() => true));
});

test("of members of a repeat", () => {
  const chain = `network: Chain
format: 1
feeds: {f: {flow: 6 L/min, to: a}}
compartments:
  a: {kind: stirred, volume: 30 L, repeat: 3, backflow: 50 %, stagnant: {volume: 6 L, exchange: 1 L/min}, to: out}
outlets: [out]
checks: [{flow: a.2, equals: 6 L/min}, {volume: a.2, equals: 12 L, within: 1e-12}, {volume: a.3, equals: 30 L}]
`;
  expect(runChecks(plantOf(chain)).map((r) => r.holds)).toEqual([true, true, false]);
});

test("what does not hold, and by how much", () => {
  const [time, volume, flow] = runChecks(
    plantOf(vessel(["mean-time: all, equals: 8 min", "volume: a, equals: 40.1 L", "flow: b, equals: 4.003 L/min"])),
  );
  expect(time).toMatchObject({ holds: false, equals: 480 });
  expect(time.value).toBeCloseTo((58 / 8) * 60, 10);
  expect(volume.holds).toBe(false);
  expect(flow.holds).toBe(true);
});
