import { expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { steadyState } from "../../src/reaction/steady.js";
import { transient } from "../../src/transient/transient.js";

const chemistry = `chemistry: Warm
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 300 K, value: 0.05 1/min, activation: 60 kJ/mol}}
reactions: [{equation: A -> P, rate: k * A, heat: -80 kJ/mol}]
medium: {heat-capacity: 4 kJ/L/K}
`;

function runOf(bodies: string, feed: string, more: string, until: number, count = 60) {
  const { document, problems } = parseNetwork(
    `network: A vessel\nformat: 1\nfeeds: {feed: {flow: 1 L/min, to: a}}\ncompartments:\n${bodies}\noutlets: [out]\n`,
    { path: "n.yaml" },
  );
  const { document: duty, problems: others } = parseDuty(
    `duty: A duty\nformat: 1\nchemistry: c.yaml\nheat: adiabatic\nheat-exchange: [{warms: feed, from: out, effectiveness: 40 %}]\nfeeds: {feed: ${feed}}\n${more}`,
    { path: "d.yaml", read: () => chemistry },
  );
  expect([...problems, ...others].map((p) => p.message)).toEqual([]);
  const plant = document && compile(document).plant;
  if (!plant || !duty) throw new Error("unread");
  const times = Float64Array.from({ length: count + 1 }, (_, k) => (60 * until * k) / count);
  const run = transient(plant, duty.chemistry, duty, times);
  expect(run.stopped).toBeUndefined();
  expect(run.balance?.off).toBeLessThan(1e-9);
  return { run, plant, duty, kelvin: run.outlets[0].temperatures ?? new Float64Array(0) };
}

const tank = "  a: {kind: stirred, volume: 8 L, to: out}";

test("a tank that warms its own feed: T' = (1 - gain) (T_feed - T) / tau; it leaves cooled by as much", () => {
  const { run, kelvin } = runOf(tank, "{temperature: 300 K}", "contents: {all: {temperature: 360 K}}", 60);
  run.times.forEach((t, k) => {
    expect(Math.abs(kelvin[k] - 300 - 36 * Math.exp((-0.6 * t) / 60 / 8))).toBeLessThan(1e-6);
  });
});

test("a tube that warms its own feed: a staircase, T(t) = 0.6 T_feed + 0.4 T(t - tau)", () => {
  const tube = "  a: {kind: tubular, volume: 8 L, to: out}";
  const { run, kelvin } = runOf(tube, "{temperature: 300 K}", "contents: {all: {temperature: 360 K}}", 39, 39);
  run.times.forEach((t, k) => {
    const passes = Math.floor(t / 60 / 8 + 1e-9);
    expect(Math.abs(kelvin[k] - 300 - 36 * 0.4 ** passes)).toBeLessThan(1e-6);
  });
});

test("hot contents with reaction come to a steady state that heats itself", () => {
  const bodies = "  a: {kind: stirred, volume: 6 L, to: b}\n  b: {kind: tubular, volume: 4 L, to: out}";
  const { kelvin, run, plant, duty } = runOf(bodies, "{A: 0.3 mol/L, temperature: 300 K}", "", 900, 10);
  const s = steadyState(plant, duty.chemistry, duty);
  expect(Math.abs(kelvin[10] - (s.outlets[0].temperature ?? 0))).toBeLessThan(1e-4);
  expect(Math.abs(run.outlets[0].values[20] - s.outlets[0].concentrations[0])).toBeLessThan(1e-3);
});
