import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import type { Duty } from "../../src/model/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { dutyInputs, networkSettings } from "../../src/reaction/conditions.js";
import { predict } from "../../src/reaction/prediction.js";
import { inUnit } from "../../src/units/unit.js";
import { readChemistry, readDuty } from "../resolve/documents.js";

const shared = (name: string) => readChemistry(readFileSync(`shared/chemistry/${name}.yaml`, "utf8")).found;

const network = (body: string): string =>
  `network: test\nformat: 1\nfeeds: {feed: {flow: 10 L/min, to: tank}}\n${body}\noutlets: [product]\n`;
const tank = network("compartments: {tank: {kind: stirred, volume: 100 L, to: product}}");
const tankAndTube = network(
  "compartments: {tank: {kind: stirred, volume: 60 L, to: leg}, leg: {kind: tubular, volume: 40 L, to: product}}",
);

function plantOf(text: string, duty?: Duty): Plant {
  const { document, problems } = parseNetwork(text);
  const { plant } = document ? compile(document, duty ? networkSettings(duty) : {}) : { plant: undefined };
  if (!plant) throw new Error(problems.map((p) => p.message).join());
  return plant;
}

function dutyOf(chemistry: ReturnType<typeof shared>, ...lines: string[]): Duty {
  const { found, told } = readDuty(
    `duty: test\nformat: 1\n${chemistry ? "chemistry: c\n" : ""}${lines.join("\n")}\n`,
    chemistry,
  );
  if (!found) throw new Error(told.join());
  return found;
}

describe("figures", () => {
  test("first order in one tank: conversion, log-removal, what is left, tracer time", () => {
    const duty = dutyOf(
      shared("first-order-decay"),
      "flows: {feed: 5 L/min}",
      "feeds: {feed: {A: 2 mmol/L}}",
      "report: [conversion of A, conversion of A at product, log-removal of A, A at product, t10 at product]",
    );
    const { figures, bounds } = predict(plantOf(tank, duty), duty);
    const values = figures.map((f) => inUnit(f.value, f.unit));
    expect(values[0]).toBeCloseTo(2 / 3, 12);
    expect(values[1]).toBeCloseTo(2 / 3, 12);
    expect(values[2]).toBeCloseTo(Math.log10(3), 12);
    expect(values[3]).toBeCloseTo(2 / 3, 12);
    expect(figures[3].unit.name).toBe("mmol/L");
    expect(values[4]).toBeCloseTo(-20 * Math.log(0.9), 8);
    expect(bounds[0]?.segregated.value).toBeCloseTo(2 / 3, 9);
    expect(bounds[0]?.maximumMixedness.value).toBeCloseTo(2 / 3, 9);
    expect(bounds[0]?.position).toBeUndefined();
    expect(bounds[4]).toBeUndefined();
  });

  test("yield and selectivity of A + B -> P, P + B -> S close the balance of A", () => {
    const duty = dutyOf(
      shared("consecutive"),
      "feeds: {feed: {A: 1 mol/L, B: 1.5 mol/L}}",
      "report: [conversion of A, yield of P from A, yield of S from A, selectivity of P over S]",
    );
    const { figures, premises } = predict(plantOf(tank), duty);
    const [x, p, s, selectivity] = figures.map((f) => f.value);
    expect(x - p - s).toBeCloseTo(0, 11);
    expect(selectivity).toBeCloseTo(p / s, 10);
    expect(premises?.bound).toBe("not checked");
  });

  test("stoichiometry counts: all of A made to P by 2 A -> P is a yield of one", () => {
    const dimer = readChemistry(
      "chemistry: dimer\nformat: 1\nspecies: {A: {}, P: {}}\nconstants: {k: 1e9 L/mol/min}\nreactions: [{equation: 2 A -> P, rate: mass-action, constant: k}]\n",
    ).found;
    const duty = dutyOf(dimer, "feeds: {feed: {A: 1 mol/L}}", "report: [yield of P from A, conversion of A]");
    const [y, x] = predict(plantOf(tank), duty).figures.map((f) => f.value);
    expect(y).toBeCloseTo(x, 12);
    expect(y).toBeGreaterThan(0.9999);
  });

  test("what cannot be said has a reason in place of a number", () => {
    const zero = readChemistry(
      "chemistry: zero\nformat: 1\nspecies: {A: {}, P: {}}\nconstants: {k: 1 mol/L/min}\nreactions: [{equation: A -> P, rate: k}]\n",
    ).found;
    const tube = network("compartments: {tank: {kind: tubular, volume: 100 L, to: product}}");
    const duty = dutyOf(zero, "feeds: {feed: {A: 1 mol/L}}", "report: [log-removal of A, conversion of P]");
    const { figures, bounds, premises } = predict(plantOf(tube), duty);
    expect(figures.map((f) => f.why)).toEqual(["infinite", "undefined"]);
    expect(bounds).toEqual([undefined, undefined]);
    expect(premises?.bound).toBe("not checked");
  });

  test("disinfection: organisms by count with disinfectant by mass, in one tank", () => {
    const duty = dutyOf(
      shared("chick-watson"),
      "feeds: {feed: {organisms: 1000 CFU/mL, disinfectant: 2 mg/L}}",
      "report: [log-removal of organisms, disinfectant at product]",
    );
    const [removal, rest] = predict(plantOf(tank), duty).figures;
    const c = 2 / (1 + 0.01 * 10);
    expect(inUnit(rest.value, rest.unit)).toBeCloseTo(c, 11);
    expect(removal.value).toBeCloseTo(Math.log10(1 + 0.5 * c * 10), 11);
  });
});

describe("bounds of a network", () => {
  test("second order in a tank then a tube lies between what its own curve allows", () => {
    const duty = dutyOf(
      shared("second-order-hydrolysis"),
      "feeds: {feed: {ester: 0.05 mol/L, base: 0.05 mol/L}}",
      "temperature: 25 degC",
      "report: [conversion of ester]",
    );
    const { bounds, premises, state } = predict(plantOf(tankAndTube), duty);
    expect(state.converged).toBe(true);
    expect(premises).toMatchObject({ bound: "yes", rate: "convex" });
    // Early mixing is the most that a tank before a tube can have: it is maximum mixedness itself.
    expect(bounds[0]?.position).toBeCloseTo(1, 6);
    expect(bounds[0]?.segregated.value).toBeGreaterThan(bounds[0]?.maximumMixedness.value ?? 1);
  });
});

test("everything declared with a ± is an input to the interval", () => {
  const duty = dutyOf(
    shared("second-order-hydrolysis"),
    "flows: {feed: 10 L/min ± 1 %}",
    "feeds: {feed: {ester: 0.05 mol/L ± 2 %, base: 0.05 mol/L}}",
    "temperature: 35 degC ± 1 K",
  );
  const inputs = dutyInputs(duty.chemistry, duty);
  expect(inputs.map((i) => i.name)).toEqual(["k", "feed.flow", "feed.ester", "temperature"]);
  expect(inputs[0].sd / inputs[0].value).toBeCloseTo(0.05, 12);
  expect(inputs[2].sd).toBeCloseTo(1, 12);
  const plant = plantOf(tank, duty);
  const base = predict(plant, duty).state.left[0];
  for (const { name, value, sd } of inputs.filter((i) => i.name !== "feed.flow")) {
    expect(predict(plant, duty, { [name]: value + sd }).state.left[0], name).not.toBe(base);
  }
});
