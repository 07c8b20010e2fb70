import { describe, expect, test } from "vitest";
import { type IntegrateOptions, integrate } from "../../src/numerics/integrate.js";
import { furthestOf, oregonator, reference, vanDerPol } from "./ode-problems.js";

/** Problems of the stiff literature beyond those of `stiff.test.ts`: closed forms, published end values, or two tolerances. */

/** P. Kaps, G. Wanner, Numer. Math. 38 (1981) 279-298: y1 follows y2^2, stiffer with 1/eps; exp(-2t), exp(-t). */
const kaps = (eps: number): IntegrateOptions => ({
  rhs: (_t, y, dy) => {
    dy[0] = -(1 / eps + 2) * y[0] + (y[1] * y[1]) / eps;
    dy[1] = y[0] - y[1] - y[1] * y[1];
  },
  start: [1, 1],
  from: 0,
  to: 3,
});

/** C.F. Curtiss, J.O. Hirschfelder, Proc. Natl. Acad. Sci. 38 (1952) 235-243: y falls onto a curve near cos t. */
const curtissHirschfelder = (rate: number): IntegrateOptions => ({
  rhs: (t, y, dy) => {
    dy[0] = -rate * (y[0] - Math.cos(t));
  },
  start: [0],
  from: 0,
  to: 10,
});
const fallen = (rate: number, t: number): number =>
  (rate * (rate * Math.cos(t) + Math.sin(t) - rate * Math.exp(-rate * t))) / (1 + rate * rate);

/** E5 of W.H. Enright, T.E. Hull, B. Lindberg, BIT 15 (1975) 10-48: a pyrolysis whose states lie between 1e-3 and 1e-22. */
const e5 = (to: number): IntegrateOptions => {
  const [a, b, c, m] = [7.89e-10, 1.1e7, 1.13e3, 1e6];
  return {
    rhs: (_t, y, dy) => {
      const first = a * y[0];
      const second = b * y[0] * y[2];
      const third = m * c * y[1] * y[2];
      dy[0] = -first - second;
      dy[1] = first - third;
      dy[3] = second - c * y[3];
      dy[2] = dy[1] - dy[3]; // y2 = y3 + y4: written out, differences of large rates would lose it
    },
    start: [1.76e-3, 0, 0, 0],
    from: 0,
    to,
  };
};

/** Van der Pol's oscillator on its own time, mu = 1000: B. van der Pol, Phil. Mag. 2 (1926) 978-992. */
const relaxation: IntegrateOptions = {
  rhs: (_t, y, dy) => {
    dy[0] = y[1];
    dy[1] = 1000 * (1 - y[0] * y[0]) * y[1] - y[0];
  },
  start: [2, 0],
  from: 0,
  to: 2000,
};

const methods = ["stiff", "auto"] as const;
const usual = { relative: 1e-8, absolute: 1e-10, maxSteps: 5000 };

describe.each(methods)("%s", (method) => {
  test.each([1e-2, 1e-5, 1e-8])("Kaps's problem, eps = %d, to its closed form", (eps) => {
    const outputs = [0.01, 0.3, 1, 2, 3];
    const run = integrate({ ...kaps(eps), ...usual, method, outputs });
    expect(run.end).toBe("reached");
    for (const [k, t] of outputs.entries())
      expect(furthestOf(run.states[k], [Math.exp(-2 * t), Math.exp(-t)])).toBeLessThan(1e-6);
  });

  test.each([50, 2000, 1e6])("Curtiss and Hirschfelder's equation, rate %d, to its closed form", (rate) => {
    const outputs = [1e-6, 0.01, 0.1, 1, 5, 10];
    const run = integrate({ ...curtissHirschfelder(rate), ...usual, method, outputs });
    expect(run.end).toBe("reached");
    for (const [k, t] of outputs.entries()) expect(furthestOf(run.states[k], [fallen(rate, t)])).toBeLessThan(1e-6);
  });

  test("Robertson's kinetics to 1e11, where they have all but ended", () => {
    // End values of the Test Set for IVP Solvers, from memory.
    const { problem } = reference("robertson");
    const run = integrate({ ...problem, to: 1e11, relative: 1e-8, absolute: 1e-18, method, maxSteps: 5000 });
    expect(run.end).toBe("reached");
    const solution = [0.2083340149701255e-7, 0.8333360770334713e-13, 0.999999979166505];
    solution.forEach((v, i) => {
      expect(Math.abs(run.last[i] / v - 1)).toBeLessThan(1e-6);
    });
  });

  test("E5 over eighteen decades of time", () => {
    // y2 and y3 at 1e13: Test Set for IVP Solvers, from memory. They hang on y2 = y3 + y4 from when these were 1e12 times as large,
    // so that rounding leaves 1e-14 of that: measured against their own largest.
    const outputs = [1e5, 1e7, 1e9, 1e10, 1e11, 1e13];
    const run = integrate({ ...e5(1e13), outputs, relative: 1e-8, absolute: 1e-26, method, maxSteps: 5000 });
    expect(run.end).toBe("reached");
    for (const [i, v] of [
      [1, 8.86765551764212e-23],
      [2, 8.85481462626884e-23],
    ])
      expect(Math.abs(run.last[i] - v)).toBeLessThan(1e-13 * peakOf(run.states, i));
  });

  test.each([
    ["E5", e5(1e11), 1e-24, [1e-3, 1, 1e5, 1e7, 1e9, 1e11]],
    ["van der Pol, mu = 1000", relaxation, 1e-10, [1, 100, 700, 1500, 2000]],
    ["van der Pol, 1e6", vanDerPol.problem, 1e-10, [0.1, 0.5, 1.2, 2]],
    ["Oregonator", oregonator.problem, 1e-10, [1, 50, 200, 360]],
    ["Robertson", reference("robertson").problem, 1e-14, [1e-3, 0.4, 40, 4e3, 1e11]],
    ["HIRES", reference("hires").problem, 1e-10, [0.1, 5, 100, 321.8122]],
  ] as const)("two tolerances agree all along: %s", (_name, problem, absolute, outputs) => {
    const common = { ...problem, to: outputs[outputs.length - 1], outputs, method, maxSteps: 20_000 };
    const [coarse, fine] = [1e-8, 1e-11].map((relative) =>
      integrate({ ...common, relative, absolute: (absolute * relative) / 1e-8 }),
    );
    expect([coarse.end, fine.end]).toEqual(["reached", "reached"]);
    for (const [k, state] of coarse.states.entries()) {
      state.forEach((v, i) => {
        const exact = fine.states[k][i];
        const off = Math.abs(v - exact) / (0.01 * peakOf(fine.states, i) + Math.abs(exact));
        expect(off).toBeLessThan(1e-6);
      });
    }
  });
});

/** Largest magnitude of a component among the states asked for. */
const peakOf = (states: readonly Float64Array[], i: number): number =>
  Math.max(...states.map((state) => Math.abs(state[i])));
