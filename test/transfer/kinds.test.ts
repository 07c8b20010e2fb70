import { describe, expect, test } from "vitest";
import { type Complex, complex } from "../../src/numerics/complex.js";
import { transferFunction } from "../../src/transfer/transfer-function.js";
import { plantOf } from "../simulate/plants.js";
import { vessel } from "./vessel.js";

const { of, add, subtract, multiply, divide, scale, exp, sqrt, size } = complex;
const plantWith = (keys: string) => plantOf(vessel(`  a: {${keys}, to: out}`));
const litre = 1e-3;
const flow = litre / 60;

/** Along the imaginary axis, where curves are made of, and off it. 1/s. */
const points: Complex[] = [0.01, 0.3, 1, 5, 40].flatMap((w) =>
  [
    { re: 0, im: w },
    { re: w, im: -2 * w },
    { re: w, im: 0 },
  ].map((s) => scale(s, 1 / 60)),
);

function agree(keys: string, formula: (s: Complex) => Complex, within = 1e-13): void {
  const { out } = transferFunction(plantWith(keys), points);
  points.forEach((s, i) => {
    const wanted = formula(s);
    expect(size(subtract(out[i], wanted)), `${keys} at ${s.re} ${s.im}`).toBeLessThan(
      within * Math.max(1, size(wanted)),
    );
  });
}

const power = (a: Complex, n: number): Complex =>
  Array.from({ length: n }).reduce<Complex>((p) => multiply(p, a), of(1));
/** s V/Q with pockets, as the balance of pocket and flow gives it: V s + q - q^2 / (q + h s). */
const withPockets = (s: Complex, volume: number, held: number, exchange: number): Complex =>
  divide(
    add(scale(s, volume), subtract(of(exchange), divide(of(exchange ** 2), add(of(exchange), scale(s, held))))),
    of(flow),
  );

describe("transfer functions for complex s", () => {
  test("closed dispersion by the formula of Danckwerts (1953)", () => {
    for (const peclet of [0.1, 1, 1.9, 2.1, 8, 100]) {
      agree(
        `kind: dispersed, volume: 3 L, peclet: ${peclet}`,
        (s) => {
          const z = scale(s, (3 * litre) / flow);
          const a = sqrt(add(of(1), scale(z, 4 / peclet)));
          const [plus, minus] = [add(of(1), a), subtract(of(1), a)];
          const half = scale(a, peclet / 2);
          const below = subtract(
            multiply(power(plus, 2), exp(subtract(half, of(peclet / 2)))),
            multiply(power(minus, 2), exp(subtract(scale(half, -1), of(peclet / 2)))),
          );
          return divide(scale(a, 4), below);
        },
        1e-12,
      );
    }
  });

  test("open dispersion by the formula of Levenspiel & Smith (1957)", () => {
    agree("kind: dispersed, volume: 3 L, peclet: 7, ends: open", (s) => {
      const a = sqrt(add(of(1), scale(s, (4 * 3 * litre) / flow / 7)));
      return divide(exp(scale(subtract(of(1), a), 3.5)), a);
    });
  });

  test("a cascade of whole tanks is the chain of them", () => {
    const wanted = transferFunction(plantWith("kind: stirred, repeat: 7, volume: 3 L"), points).out;
    agree("kind: cascade, volume: 3 L, tanks: 7", (s) => wanted[points.indexOf(s)]);
  });

  test("pockets beside a tank, a tube, dispersed flow and a cascade", () => {
    const pockets = "stagnant: {volume: 1.5 L, exchange: 0.7 L/min}";
    const z = (s: Complex) => withPockets(s, 3 * litre, 1.5 * litre, 0.7 * flow);
    agree(`kind: stirred, volume: 3 L, ${pockets}`, (s) => divide(of(1), add(of(1), z(s))));
    agree(`kind: stirred, repeat: 4, volume: 3 L, ${pockets}`, (s) =>
      power(divide(of(1), add(of(1), scale(z(s), 1 / 4))), 4),
    );
    agree(`kind: cascade, volume: 3 L, tanks: 4, ${pockets}`, (s) =>
      power(divide(of(1), add(of(1), scale(z(s), 1 / 4))), 4),
    );
    agree(`kind: tubular, volume: 3 L, ${pockets}`, (s) => exp(scale(z(s), -1)));
    agree(`kind: dispersed, volume: 3 L, peclet: 5, ends: open, ${pockets}`, (s) => {
      const a = sqrt(add(of(1), scale(z(s), 4 / 5)));
      return divide(exp(scale(subtract(of(1), a), 2.5)), a);
    });
  });

  test("many tanks with pockets are the tube with pockets; many tanks with backflow are dispersed flow", () => {
    const s = [0.3 / 60, 1 / 60];
    const pockets = "stagnant: {volume: 1.5 L, exchange: 0.7 L/min}";
    const value = (keys: string) => transferFunction(plantWith(keys), s).out;
    const tube = value(`kind: tubular, volume: 3 L, ${pockets}`);
    const error = (n: number) =>
      Math.abs(value(`kind: stirred, repeat: ${n}, volume: 3 L, ${pockets}`)[0] / tube[0] - 1);
    expect(error(1000) / error(2000)).toBeCloseTo(2, 1);
    // n tanks with backflow b: dispersion D = u L (1 + 2 b/Q) / (2 n)
    const peclet = 5;
    const wanted = value(`kind: dispersed, volume: 3 L, peclet: ${peclet}`);
    const off = (n: number) =>
      Math.abs(value(`kind: stirred, repeat: ${n}, backflow: ${n / peclet - 0.5}, volume: 3 L`)[1] / wanted[1] - 1);
    expect(off(1000)).toBeLessThan(1e-3);
    expect(off(1000) / off(2000)).toBeCloseTo(4, 1);
  });

  test("laminar flow keeps a pure delay of half its space time, a tube with pockets all of it", () => {
    for (const keys of [
      "kind: laminar, volume: 4 L",
      "kind: tubular, volume: 2 L, stagnant: {volume: 1 L, exchange: 1 L/min}",
    ]) {
      const { nodes } = plantWith(keys);
      const { block, inflow } = nodes[1];
      if (!block) throw new Error("no block");
      expect(block.delay(inflow)).toBeCloseTo(120, 9);
      for (const s of points) {
        const product = multiply(block.transfer(s, inflow), exp(scale(s, 120)));
        expect(size(subtract(product, block.undelayed(s, inflow)))).toBeLessThan(
          1e-12 * size(block.undelayed(s, inflow)),
        );
      }
      expect(block.undelayed(of(1e9), inflow).re).toBeGreaterThan(0);
    }
  });
});

describe("edges", () => {
  test("bodies of no volume let everything through; nothing overflows at extreme Péclet numbers", () => {
    const zero = vessel(
      ["dispersed, peclet: 3", "laminar", "cascade, tanks: 2", "tubular", "stirred, repeat: 3, backflow: 2"]
        .map((kind, i) => `  b${i}: {kind: ${kind}, volume: 0 L, to: ${i < 4 ? `b${i + 1}` : "out"}}`)
        .join("\n"),
      "b0",
    );
    expect(transferFunction(plantOf(zero), 0.3).out).toBeCloseTo(1, 14);
    const at = (keys: string) => transferFunction(plantWith(keys), 1 / 60).out;
    expect(at("kind: dispersed, volume: 1 L, peclet: 1e9")).toBeCloseTo(Math.exp(-1), 8);
    expect(at("kind: dispersed, volume: 1 L, peclet: 1e-9")).toBeCloseTo(1 / 2, 9);
    expect(at("kind: dispersed, volume: 1 L, peclet: 1e9, ends: open")).toBeCloseTo(Math.exp(-1), 8);
    expect(at("kind: cascade, volume: 1 L, tanks: 1e9")).toBeCloseTo(Math.exp(-1), 8);
  });

  test("a real s gives real values, many give many; where the continuation is not real, NaN", () => {
    const plant = plantWith("kind: laminar, volume: 1 L");
    expect(transferFunction(plant, 0)).toEqual({ out: 1 });
    expect(transferFunction(plant, [0, 1 / 60]).out).toBeInstanceOf(Float64Array);
    expect(transferFunction(plant, { re: 0, im: 0 }).out).toEqual({ re: 1, im: 0 });
    expect(transferFunction(plant, -1 / 60).out).toBeNaN();
    const closed = transferFunction(plantWith("kind: dispersed, volume: 1 L, peclet: 4"), [
      -1.2 / 60,
      -0.99 / 60,
      -1.01 / 60,
    ]);
    expect(closed.out.every(Number.isFinite)).toBe(true);
    expect(() => transferFunction(plant, 1, "nowhere")).toThrow(RangeError);
  });
});
