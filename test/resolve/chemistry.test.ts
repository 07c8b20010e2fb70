import { readdirSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import type { Chemistry } from "../../src/model/chemistry.js";
import { dimensions } from "../../src/units/dimension.js";
import { chemistry, readChemistry } from "./documents.js";

const molar = dimensions["molar concentration"];
const mass = dimensions["mass concentration"];
const count = dimensions["number concentration"];

/** Env of a chemistry at given concentrations and temperature, its constants filled in. */
function envOf(c: Chemistry, concentrations: readonly number[], temperature = 298.15): Float64Array {
  const env = new Float64Array(c.temperatureSlot + 1);
  env.set(concentrations);
  env[c.temperatureSlot] = temperature;
  for (const k of c.order) env[c.species.length + k] = c.constants[k].value.of(env);
  return env;
}

function good(text: string): Chemistry {
  const { found, told } = readChemistry(text);
  expect(told.filter((t) => !t.startsWith("unused-name"))).toEqual([]);
  return found as Chemistry;
}

const numbers = (c: Chemistry, r: number): number[] => {
  const all = c.species.map(() => 0);
  for (const { species, number } of c.reactions[r].makes) all[species] = number(envOf(c, all));
  return all;
};

describe("shared chemistries", () => {
  test.each(readdirSync("shared/chemistry").filter((f) => f.endsWith(".yaml")))("%s reads without a word", (file) => {
    const { found, told } = readChemistry(readFileSync(`shared/chemistry/${file}`, "utf8"));
    expect(told).toEqual([]);
    expect(found?.bases.length).toBeGreaterThan(0);
  });
});

describe("equations and rates", () => {
  test("a law of its own, in SI", () => {
    const c = good(chemistry("{k: 2 L/mol/min}", "{equation: A + 2 B -> P, rate: k * A * B}"));
    expect(numbers(c, 0)).toEqual([-1, -2, 1]);
    expect(c.reactions[0].rate(envOf(c, [3, 5, 0]))).toBeCloseTo((2e-3 / 60) * 15, 15);
    expect(c.bases).toEqual([[molar, molar, molar]]);
  });

  test("mass action counts molecules, both ways", () => {
    const c = good(
      chemistry("{k1: 2 L2/mol2/min, k2: 3 1/min}", "{equation: A + 2 B <-> P, rate: mass-action, constant: [k1, k2]}"),
    );
    const expected = (2e-6 / 60) * 3 * 25 - (3 / 60) * 7;
    expect(c.reactions[0].rate(envOf(c, [3, 5, 7]))).toBeCloseTo(expected, 14);
  });

  test("derivatives are those of the law", () => {
    const c = good(
      chemistry(
        "{k: 2 mol/L/min, half: 0.3 mol/L}",
        "{equation: A + B -> P, rate: k * A / (half + A) * (B / half)^0.5}",
      ),
    );
    const at = [120, 40, 0];
    const slope = new Float64Array(3);
    c.reactions[0].gradient(envOf(c, at), slope);
    at.forEach((x, i) => {
      const h = 1e-5 * (x + 1);
      const rate = (shift: number) => c.reactions[0].rate(envOf(c, at.with(i, x + shift)));
      const central = (8 * (rate(h) - rate(-h)) - (rate(2 * h) - rate(-2 * h))) / (12 * h);
      expect(Math.abs(slope[i] - central)).toBeLessThan(1e-10 * (Math.abs(slope[i]) + 1e-3));
    });
  });

  test("an autocatalyst stands on both sides", () => {
    const c = good(chemistry("{k: 2 L/mol/min}", "{equation: A + B -> 2 B + P, rate: mass-action, constant: k}"));
    expect(numbers(c, 0)).toEqual([-1, 1, 1]);
    expect(c.reactions[0].rate(envOf(c, [3, 5, 0]))).toBeCloseTo((2e-3 / 60) * 15, 15);
  });

  test("yields may be constants, and constants may use one another in any order", () => {
    const c = good(chemistry("{k: 2 * base, base: 0.1 1/s, y: 80 %}", "{makes: {A: -1, P: y}, rate: k * A}"));
    expect(numbers(c, 0)).toEqual([-1, 0, 0.8]);
    expect(c.reactions[0].rate(envOf(c, [3, 0, 0]))).toBeCloseTo(0.6, 15);
  });

  test("Arrhenius: the value at its temperature, the slope of its logarithm elsewhere", () => {
    const c = good(
      chemistry("{k: {at: 25 degC, value: 2 1/min ± 5 %, activation: 45 kJ/mol}}", "{equation: A -> P, rate: k * A}"),
    );
    expect(c.needsTemperature).toBe(true);
    const k = (T: number) => c.constants[0].value.of(envOf(c, [0, 0, 0], T));
    expect(k(298.15)).toBeCloseTo(2 / 60, 15);
    expect(Math.log(k(320) / k(300))).toBeCloseTo((45000 / 8.31446261815324) * (1 / 300 - 1 / 320), 12);
    expect(c.constants[0].value.sd?.(envOf(c, [0, 0, 0], 350))).toBeCloseTo(0.05 * k(350), 12);
  });
});

describe("what concentrations count", () => {
  test("first order leaves it open, alike within a reaction", () => {
    const c = good(chemistry("{k: 2 1/min}", "{equation: A -> P, rate: k * A}"));
    expect(c.bases[0]).toEqual([molar, molar, molar]);
    expect(c.bases.every(([a, , p]) => a === p)).toBe(true);
    expect(c.bases.some(([a]) => a === count)).toBe(true);
  });

  test("chlorine by mass and organisms by count go together", () => {
    const c = good(readFileSync("shared/chemistry/chick-watson.yaml", "utf8"));
    expect(c.bases.every(([, disinfectant]) => disinfectant === mass)).toBe(true);
    expect(c.bases.some(([organisms]) => organisms === count)).toBe(true);
  });

  test("a half order in grams", () => {
    const c = good(chemistry("{k: 2 g^0.5/L^0.5/min}", "{makes: {A: -1}, rate: k * A^0.5}"));
    expect(c.bases.every(([a]) => a === mass)).toBe(true);
  });
});

describe("what is wrong is told where it stands", () => {
  const first = "{equation: A -> P, rate: k * A}";
  test.each([
    ["{k: 2 1/min}", ["{equation: A -> Q, rate: k * A}"], "unknown-place at Q"],
    ["{k: 2 1/min}", ["{equation: A -> P, rate: k * C}"], "unknown-name at C"],
    ["{k: 2 1/min}", ["{equation: A + B -> P, rate: k * A * B}"], "rate-dimension at k * A * B"],
    ["{k: 2 1/min}", ["{equation: A + B -> P, rate: mass-action, constant: k}"], "rate-dimension at k"],
    ["{k: 2 1/min}", ["{equation: A -> P, rate: k * A + A}"], "unlike-terms at k * A + A"],
    ["{k: 2 1/min}", ["{equation: A P, rate: k * A}"], "bad-equation at A P"],
    ["{k: 2 1/min}", ["{equation: A => P, rate: k * A}"], "bad-equation at =>"],
    ["{k: 2 1/min}", ["{equation: A + -> P, rate: k * A}"], "bad-equation at A + "],
    ["{k: 2 1/min}", ["{equation: 2A -> P, rate: k * A}"], "bad-equation at 2A"],
    ["{k: 2 1/min}", ["{equation: 0.5 A -> P, rate: k * A}"], "bad-equation at 0.5"],
    ["{k: 2 1/min}", ["{equation: 0 A -> P, rate: k * A}"], "zero-stoichiometry at A"],
    ["{k: 2 1/min}", ["{makes: {A: 0, P: 1}, rate: k * A}"], "zero-stoichiometry at 0"],
    ["{k: 2 1/min}", ["{equation: A -> A, rate: k * A}"], "nothing-happens at A -> A"],
    ["{k: 2 1/min}", ["{makes: {A: -1}, rate: mass-action, constant: k}"], "mass-action-makes at mass-action"],
    ["{k: 2 1/min}", ["{equation: A <-> P, rate: mass-action, constant: k}"], "mass-action-constants at k"],
    ["{k: 2 1/min}", ["{equation: A -> P, rate: k * A, constant: k}"], "constant-without-mass-action at k"],
    ["{k: {value: 2 1/min, at: 298 K}}", [first], "arrhenius-half at k"],
    ["{k: 2 * j, j: 2 * k}", [first], "circular-names at k"],
    ["{A: 2 1/min}", ["{equation: A -> P, rate: A * A}"], "name-taken at A"],
    [
      "{k: 2 1/min, j: 3 L/g/min}",
      [first, "{equation: A -> B, rate: j * A^2}", "{equation: A -> P, rate: i * A^2}"],
      "unknown-name at i",
    ],
  ])("%s %j", (constants, reactions, expected) => {
    const { found, told } = readChemistry(chemistry(constants, ...reactions));
    expect(found).toBeUndefined();
    expect(told).toContain(expected);
    expect(told.length).toBe(1);
  });

  test("two laws that cannot both be right", () => {
    const { told, problems } = readChemistry(
      chemistry(
        "{k: 2 L/mol/min, j: 3 L/g/min}",
        "{equation: A + A -> P, rate: k * A^2}",
        "{equation: A -> B, rate: j * A^2}",
      ),
    );
    expect(told).toEqual(["rates-disagree at j * A^2"]);
    expect(problems[0].also).toBeDefined();
  });

  test("the fix names the unit that would do, and doing it helps", () => {
    const { problems } = readChemistry(
      chemistry("{k: 2 1/min}", "{equation: A + 2 B -> P, rate: mass-action, constant: k}"),
    );
    const unit = / such as (\S+)$/.exec(problems[0].fix)?.[1];
    good(chemistry(`{k: 2 ${unit}}`, "{equation: A + 2 B -> P, rate: mass-action, constant: k}"));
  });

  test("what is used nowhere is a warning", () => {
    const { found, told } = readChemistry(chemistry("{k: 2 1/min, j: 3 1/min}", "{equation: A -> P, rate: k * A}"));
    expect(found).toBeDefined();
    expect(told).toEqual(["unused-name at B", "unused-name at j"]);
  });
});
