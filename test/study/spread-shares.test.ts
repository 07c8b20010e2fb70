import { expect, test } from "vitest";
import type { Duty } from "../../src/model/duty.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { drawsOf } from "../../src/study/draws-of.js";
import { sampleOf } from "../../src/study/sample.js";
import { type Spread, spreadsOf } from "../../src/study/spread-shares.js";

/** A tube whose log-removal is k V / (Q ln 10): a product, so that relative variances add where they are small. */
const network = (constants: string) => `network: Tube
format: 1
constants: {${constants}}
feeds: {feed: {flow: 10 L/min, to: pipe}}
compartments: {pipe: {kind: tubular, volume: size * fill, to: out}}
outlets: [out]
`;
const chemistry = (k: string) => `chemistry: Decay
format: 1
species: {A: {}}
constants: {k: ${k}}
reactions: [{makes: {A: -1}, rate: k * A}]
`;
const duty = `duty: Normal
format: 1
chemistry: decay.yaml
flows: {feed: 10 L/min ± 1 %}
feeds: {feed: {A: 1 mol/L ± 10 %}}
report: [log-removal of A, A at out]
`;

function spreads(constants: string, k: string, count = 200, seed = 3): (Spread | undefined)[] {
  const read = () => chemistry(k);
  const vessel = parseNetwork(network(constants)).document;
  const operation = {
    network: vessel,
    duty: parseDuty(duty, { read }).document as Duty,
    values: {},
    kinetics: new Map<string, string>(),
  };
  if (!vessel) throw new Error("no vessel");
  const sample = sampleOf({ ...operation, network: vessel }, drawsOf(vessel, undefined, count, seed).settings, seed);
  return spreadsOf(sample.operation, undefined, sample.rows, sample.values);
}

const share = (spread: Spread | undefined, name: string): number =>
  spread?.drivers.find((d) => d.name === name)?.share ?? 0;

test("of a product with small spreads each factor holds its part of the relative variance", () => {
  const [kill] = spreads("size: 40 L ± 2 %, fill: 0.9 ± 1 %", "0.1 1/min ± 3 %");
  const whole = 9 + 4 + 1 + 1;
  expect(kill?.method).toBe("regression");
  expect(share(kill, "k")).toBeCloseTo(9 / whole, 1.5);
  expect(share(kill, "size")).toBeCloseTo(4 / whole, 1.5);
  expect(share(kill, "feed.flow")).toBeCloseTo(1 / whole, 1.5);
  // What is fed does not matter where a rate is first order.
  expect(share(kill, "feed.A")).toBe(0);
  for (const d of kill?.drivers ?? []) expect(d.linear).toBeCloseTo(d.share, 1.3);
  expect(kill?.linearSd).toBeCloseTo(kill?.sd ?? 0, 2);
  expect(kill?.drivers.map((d) => d.kind).slice(0, 2)).toEqual(["kinetics", "vessel"]);
});

test("wide spreads that act jointly are gone into by pick-freeze, and the two parts of a figure agree with algebra", () => {
  const [, left] = spreads("size: 40 L ± 0.1 %, fill: 1", "1.5 1/min ± 40 %", 2000);
  expect(left?.method).toBe("pick-freeze");
  const sum = (left?.drivers ?? []).reduce((s, d) => s + d.share, 0);
  expect(sum).toBeLessThan(1 + 1e-12);
  expect(share(left, "k")).toBeGreaterThan(0.6);
  for (const d of left?.drivers ?? []) expect(d.total).toBeGreaterThan(d.share - 0.1);
});

test("the order in which inputs are declared changes nothing; the same seed gives the same, another seed nearly", () => {
  const found = spreads("size: 40 L ± 2 %, fill: 0.9 ± 1 %", "0.1 1/min ± 3 %");
  expect(spreads("fill: 0.9 ± 1 %, size: 40 L ± 2 %", "0.1 1/min ± 3 %")).toEqual(found);
  const [other] = spreads("size: 40 L ± 2 %, fill: 0.9 ± 1 %", "0.1 1/min ± 3 %", 200, 4);
  expect(other).not.toEqual(found[0]);
  expect(other?.sd).toBeCloseTo(found[0]?.sd ?? 0, 2);
});

test("where nothing is unsure nothing holds a share", () => {
  expect(spreads("size: 40 L, fill: 1", "0.1 1/min", 40)[0]?.drivers.map((d) => d.name)).toEqual(["feed.flow"]);
});
