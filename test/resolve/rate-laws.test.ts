import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { chemistry, readChemistry } from "./documents.js";

const volumes = { L: 1e-3, m3: 1, mL: 1e-6 } as const;
const amounts = { mol: 1, mmol: 1e-3, kmol: 1e3 } as const;
const times = { s: 1, min: 60, h: 3600 } as const;
const key = <T extends object>(o: T) => fc.constantFrom(...(Object.keys(o) as (keyof T & string)[]));

/** A constant of an order n law in units of its own choice: concentration^(1 - n) per time. */
const unitOf = (order: number, v: keyof typeof volumes, a: keyof typeof amounts, t: keyof typeof times): string => {
  const power = order - 1;
  if (power === 0) return `1/${t}`;
  const raised = (unit: string): string => (unit === "m3" ? `m${3 * power}` : power === 1 ? unit : `${unit}${power}`);
  return power > 0 ? `${raised(v)}/${raised(a)}/${t}` : `${a}/${v}/${t}`;
};

describe("units of rates", () => {
  test("a constant in any units that give concentration per time is right, and the rate is the same in all", () => {
    const cases = fc.tuple(
      fc.integer({ min: 0, max: 2 }),
      fc.integer({ min: 0, max: 2 }),
      key(volumes),
      key(amounts),
      key(times),
    );
    fc.assert(
      fc.property(cases, ([a, b, v, m, t]) => {
        const law = `k${" * A".repeat(a)}${" * B".repeat(b)}`;
        const { found, told } = readChemistry(
          chemistry(`{k: 2 ${unitOf(a + b, v, m, t)}}`, `{equation: A + B -> P, rate: ${law}}`),
        );
        expect(told).toEqual([]);
        const k = 2 * (volumes[v] / amounts[m]) ** (a + b - 1) * (1 / times[t]);
        const rate = found?.reactions[0].rate([3, 5, 0, k]) ?? Number.NaN;
        const bound = found?.constants[0].value.of([]) ?? Number.NaN;
        expect(bound / k).toBeCloseTo(1, 12);
        expect(rate / (k * 3 ** a * 5 ** b)).toBeCloseTo(1, 12);
      }),
      { numRuns: 60 },
    );
  });

  test("a constant of another order is an error, always", () => {
    const cases = fc.tuple(
      fc.integer({ min: 1, max: 3 }),
      fc.integer({ min: 1, max: 3 }),
      key(volumes),
      key(amounts),
      key(times),
    );
    fc.assert(
      fc.property(cases, ([order, wrong, v, m, t]) => {
        fc.pre(order !== wrong);
        const { found, told } = readChemistry(
          chemistry(`{k: 2 ${unitOf(wrong, v, m, t)}}`, `{equation: A -> P, rate: k * A^${order}}`),
        );
        expect(found).toBeUndefined();
        expect(told).toEqual([`rate-dimension at k * A^${order}`]);
      }),
      { numRuns: 40 },
    );
  });
});

describe("values of rates", () => {
  const told = (constants: string, ...reactions: string[]) => readChemistry(chemistry(constants, ...reactions)).told;

  test("what fades with its reactants, has a root or a saturation is right", () => {
    const constants = "{k: 1 mol/L/min, half: 0.1 mol/L, n: 0.5}";
    for (const law of [
      "k * (A / half)^n * (B / half)",
      "k * A / (half + A) * B / half",
      "k * A * B / (half + A + B)^2",
      "k * (1 - exp(-A / half)) * tanh(B / half)",
    ])
      expect(told(constants, `{equation: A + B -> P, rate: "${law}"}`).filter((t) => !t.startsWith("unused"))).toEqual(
        [],
      );
  });

  test("what `makes:` says may run both ways", () => {
    expect(
      told("{k: 1 1/min, end: 0.2 mol/L}", "{makes: {A: 1}, rate: k * (end - A)}", "{equation: B -> P, rate: k * B}"),
    ).toEqual([]);
  });

  test("a sum of masses may differ by the digits of its molar masses, no more", () => {
    const text = (mass: number) =>
      `chemistry: c\nformat: 1\nspecies: {A: {molar-mass: 100 g/mol}, P: {molar-mass: ${mass} g/mol}}\nconstants: {k: 1 1/min}\nreactions: [{equation: A -> P, rate: k * A}]\n`;
    expect(readChemistry(text(100.3)).told).toEqual([]);
    expect(readChemistry(text(102)).told).toEqual(["mass-not-kept at A -> P"]);
    expect(readChemistry(text(102).replace("A -> P, rate", "2 A -> P, rate")).told).toEqual([
      "mass-not-kept at 2 A -> P",
    ]);
  });
});
