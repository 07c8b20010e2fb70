import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { integrate } from "../../src/numerics/integrate.js";
import type { Pattern } from "../../src/numerics/linear-solver.js";
import { radauStep } from "../../src/numerics/radau.js";
import { radauCoefficients } from "../../src/numerics/radau-coefficients.js";
import { type SparseRows, sparseRows } from "../../src/numerics/sparse.js";
import { radauIntegrator } from "../../src/numerics/stiff.js";
import { jacobianOf, separateColumns } from "../../src/numerics/stiff-jacobian.js";
import { shiftedSystems } from "../../src/numerics/stiff-linear.js";
import { stepPolynomial } from "../../src/numerics/stiff-polynomial.js";
import { flowMatrix, lattice } from "./flow-matrix.js";
import { furthestOf, oregonator, reference, vanDerPol } from "./ode-problems.js";

const problems = {
  HIRES: reference("hires"),
  Robertson: reference("robertson"),
  Oregonator: oregonator,
  "van der Pol": vanDerPol,
};

describe.each(Object.entries(problems))("%s", (_name, { problem, solution }) => {
  test.each(["stiff", "auto"] as const)("to 1e-7 at relative 1e-8, absolute 1e-10: %s", (method) => {
    const run = integrate({ ...problem, relative: 1e-8, absolute: 1e-10, method, maxSteps: 2000 });
    expect(run.end).toBe("reached");
    expect(furthestOf(run.last, solution)).toBeLessThan(1e-7);
  });

  test("with any number of stages, at a looser and a tighter tolerance", () => {
    for (const stages of [3, 5, 7] as const) {
      for (const [relative, bound] of [
        [1e-6, 1e-5],
        [1e-10, 1e-9],
      ]) {
        const y = Float64Array.from(problem.start);
        const { from, to } = problem;
        const solve = radauIntegrator({ ...problem, size: y.length }, relative, stages);
        const run = solve(
          { ...problem, from, to, relative, absolute: relative / 100, maxSteps: 2e4, outputs: [] },
          y,
          () => {},
        );
        expect(run.t).toBe(to);
        expect(furthestOf(y, solution)).toBeLessThan(bound);
      }
    }
  });
});

test.each([
  ["Brusselator", 1e-8, 1e-10, 1e-5],
  ["Arenstorf", 1e-13, 1e-13, 1e-6],
])("%s, which is not stiff, by the stiff method too", (name, relative, absolute, bound) => {
  const { problem, solution } = reference(name.toLowerCase());
  const run = integrate({ ...problem, relative, absolute, method: "stiff" });
  expect(furthestOf(run.last, solution)).toBeLessThan(bound);
});

describe("order", () => {
  /** Error after steps of one length, with the iteration for the stages carried to rounding. */
  function errorWith(
    stages: 1 | 3 | 5 | 7,
    rhs: (t: number, y: Float64Array, dy: Float64Array) => void,
    exact: (t: number) => number[],
    [to, count]: [number, number],
  ): number {
    const y = Float64Array.from(exact(0));
    const problem = { size: y.length, rhs };
    const jacobian = jacobianOf(problem);
    const k = radauCoefficients(stages);
    const systems = shiftedSystems(jacobian, k.pairs.length);
    const step = radauStep(problem, k, systems);
    const guess = stepPolynomial(y.length, k.c, step.z);
    const scale = new Float64Array(y.length).fill(1e-13);
    const f = new Float64Array(y.length);
    const h = to / count;
    for (let i = 0; i < count; i++) {
      rhs(i * h, y, f);
      jacobian.evaluate(i * h, y, f, scale, h);
      expect(systems.factor(jacobian, k.real, k.pairs, h)).toBe(true);
      expect(step.solve(i * h, h, y, scale, guess, 1, 0)).toBe("converged");
      for (let m = 0; m < y.length; m++) y[m] += step.z[stages - 1][m];
    }
    return Math.hypot(...exact(to).map((v, m) => y[m] - v));
  }
  const observed = (coarse: number, fine: number, ratio: number): number => Math.log(coarse / fine) / Math.log(ratio);

  test.each([
    [1, 200],
    [3, 32],
    [5, 10],
    [7, 5],
  ] as const)("%i stages: 2s - 1, on a turning circle", (stages, count) => {
    const turn = (_t: number, y: Float64Array, dy: Float64Array): void => {
      dy[0] = -y[1];
      dy[1] = y[0];
    };
    const circle = (t: number): number[] => [Math.cos(t), Math.sin(t)];
    const [coarse, fine] = [count, 2 * count].map((n) => errorWith(stages, turn, circle, [20, n]));
    expect(Math.abs(observed(coarse, fine, 2) - (2 * stages - 1))).toBeLessThan(0.5);
  });

  test.each([
    [1, 400],
    [3, 48],
  ] as const)("%i stages: 2s - 1, with a slope that depends on time and state", (stages, count) => {
    const slope = (t: number, y: Float64Array, dy: Float64Array): void => {
      dy[0] = 3 * y[0] * Math.cos(3 * t);
    };
    const [coarse, fine] = [count, 2 * count].map((n) =>
      errorWith(stages, slope, (t) => [Math.exp(Math.sin(3 * t))], [1.7, n]),
    );
    expect(Math.abs(observed(coarse, fine, 2) - (2 * stages - 1))).toBeLessThan(0.3);
  });

  test.each([1, 3, 5, 7] as const)("%i stages: L-stable, a long step forgets a fast transient", (stages) => {
    const fast = (_t: number, y: Float64Array, dy: Float64Array): void => {
      dy[0] = -1e9 * y[0];
    };
    expect(errorWith(stages, fast, (t) => [Math.exp(-1e9 * t)], [1, 1])).toBeLessThan(1e-7);
  });

  test("outputs between steps are as good as the tolerance promises", () => {
    const { problem } = problems["van der Pol"];
    const outputs = Array.from({ length: 200 }, (_, i) => (i + 1) / 100);
    const fine = integrate({ ...problem, relative: 1e-12, absolute: 1e-12, method: "stiff", outputs });
    for (const relative of [1e-4, 1e-6, 1e-8]) {
      const run = integrate({ ...problem, relative, absolute: relative, method: "stiff", outputs });
      for (const [k, state] of run.states.entries()) {
        const exact = fine.states[k][0];
        expect(Math.abs(state[0] - exact)).toBeLessThan(30 * relative * (1 + Math.abs(exact)));
      }
    }
  });
});

describe("the path", () => {
  test.each(["nonstiff", "stiff", "auto"] as const)("does not depend on the times asked: %s", (method) => {
    const { problem } = reference("brusselator");
    const alone = integrate({ ...problem, method, outputs: [13.7], stops: [9] });
    const many = integrate({ ...problem, method, outputs: Array.from({ length: 201 }, (_, i) => i / 10), stops: [9] });
    expect(Array.from(alone.states[0])).toEqual(Array.from(many.states[137]));
    expect(Array.from(alone.last)).toEqual(Array.from(many.last));
    expect(alone.stats).toEqual(many.stats);
  });

  test("a problem that is not stiff stays with the explicit method; a stiff one does not", () => {
    const { problem } = reference("arenstorf");
    const easy = integrate({ ...problem, to: 5, relative: 1e-6, absolute: 1e-6 });
    expect(easy.stats.method).toBe("nonstiff");
    expect(easy.stats.jacobians).toBe(0);
    const hard = integrate({ ...problems.Oregonator.problem, relative: 1e-6, absolute: 1e-8 });
    expect(hard.stats.method).toBe("both");
    expect(hard.stats.rhs).toBeLessThan(15_000);
  });

  test("a stiff system of stiffness 1e12 that rests costs next to nothing", () => {
    const rhs = (t: number, y: Float64Array, dy: Float64Array): void => {
      dy[0] = -1e12 * (y[0] - Math.cos(t)) - Math.sin(t);
    };
    const run = integrate({ rhs, start: [0], from: 0, to: 10, outputs: [1, 10] });
    expect(run.states[0][0]).toBeCloseTo(Math.cos(1), 9);
    expect(run.states[1][0]).toBeCloseTo(Math.cos(10), 9);
    expect(run.stats.rhs).toBeLessThan(6000);
  });
});

test.each([
  [1e-8, 60], // 139 rejections without a measure of that noise
  [1e-9, 300], // 3653
])("rounding of fast terms, which drowns slow balances, does not stall the iteration: %d", (relative, most) => {
  // Three tanks, A <-> B at 1e6 and 2.5e5 per time, B + C -> D slow. Summed in this order, A + B carries noise of 1e-11. Demo.
  const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
    for (let a = 0; a < 12; a += 4) {
      const inflow = (s: number) => (a === 0 ? [1, 0, 0.7, 0][s] : y[a - 4 + s]) / 10;
      const rate = 0.8 * y[a + 1] * y[a + 2];
      dy[a] = inflow(0) - (1e6 + 0.1) * y[a] + 2.5e5 * y[a + 1];
      dy[a + 1] = inflow(1) + 1e6 * y[a] - (2.5e5 + 0.1) * y[a + 1] - rate;
      dy[a + 2] = inflow(2) - 0.1 * y[a + 2] - rate;
      dy[a + 3] = inflow(3) - 0.1 * y[a + 3] + rate;
    }
  };
  const problem = { rhs, start: new Float64Array(12), from: 0, to: 4000, method: "stiff" as const };
  const run = integrate({ ...problem, relative, absolute: relative / 1000 });
  expect(run.end).toBe("reached");
  expect(run.last[8] + run.last[9] + run.last[11]).toBeCloseTo(1, 8);
  expect(run.last[10] + run.last[11]).toBeCloseTo(0.7, 8);
  expect(run.stats.rejected).toBeLessThan(most);
});

describe("Jacobian", () => {
  /** A flow network whose first-order and second-order reactions are fast in places. Demo data. */
  const reacting = (a: SparseRows, rate: (i: number) => number) => {
    const n = a.size;
    const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
      for (let i = 0; i < n; i++) {
        let sum = i === 0 ? 1 : 0;
        for (let k = a.start[i]; k < a.start[i + 1]; k++) sum -= a.value[k] * y[a.column[k]];
        dy[i] = sum - rate(i) * y[i] * y[i];
      }
    };
    const jacobian = (_t: number, y: Float64Array, entries: Float64Array): void => {
      for (let i = 0; i < n; i++) {
        for (let k = a.start[i]; k < a.start[i + 1]; k++) {
          entries[k] = -a.value[k] - (a.column[k] === i ? 2 * rate(i) * y[i] : 0);
        }
      }
    };
    const pattern: Pattern = a;
    return { rhs, jacobian, pattern, start: new Float64Array(n), from: 0, to: 20 };
  };

  test("sparse or dense, given or by differences: one solution", () => {
    const { rhs, jacobian, pattern, ...rest } = reacting(flowMatrix(40, 1, 11), (i) => 10 ** (i % 7));
    const n = rest.start.length;
    const dense = (t: number, y: Float64Array, entries: Float64Array): void => {
      const sparse = new Float64Array(pattern.column.length);
      jacobian(t, y, sparse);
      for (let i = 0; i < n; i++)
        for (let k = pattern.start[i]; k < pattern.start[i + 1]; k++) entries[i * n + pattern.column[k]] = sparse[k];
    };
    const common = { rhs, ...rest, method: "stiff" as const, outputs: [0.1, 1, 20] };
    const runs = [{ jacobian, pattern }, { pattern }, { jacobian: dense }, {}].map((how) =>
      integrate({ ...common, ...how }),
    );
    for (const run of runs) {
      expect(run.end).toBe("reached");
      for (const [k, state] of run.states.entries())
        for (let i = 0; i < n; i++) expect(Math.abs(state[i] - runs[0].states[k][i])).toBeLessThan(1e-9);
    }
    expect(runs[1].stats.rhs).toBeLessThan(runs[3].stats.rhs);
    expect(runs[0].stats.jacobians).toBeGreaterThan(0);
  });

  test("a line, whose matrix is a band, and a cube of 216 cells come to their steady state", () => {
    for (const a of [flowMatrix(200, 1, 5, 1), lattice(6, 3)]) {
      const problem = { ...reacting(a, (i) => (i % 3) * 1e5), to: 1e4 };
      const run = integrate({ ...problem, relative: 1e-6, absolute: 1e-10, method: "stiff" });
      expect(run.end).toBe("reached");
      const slope = new Float64Array(a.size);
      problem.rhs(0, run.last, slope);
      for (const s of slope) expect(Math.abs(s)).toBeLessThan(1e-6);
    }
  });

  test("a wrong one costs steps, not accuracy", () => {
    const { problem, solution } = problems.HIRES;
    const exact = jacobianOf({ ...problem, size: 8 });
    const off = (t: number, y: Float64Array, entries: Float64Array): void => {
      const f = new Float64Array(8);
      problem.rhs(t, y, f);
      exact.evaluate(t, y, f, new Float64Array(8).fill(1e-10), 1e-3);
      for (let k = 0; k < 64; k++) entries[k] = 1.2 * exact.value[k];
    };
    const run = integrate({ ...problem, jacobian: off, relative: 1e-8, absolute: 1e-10, method: "stiff" });
    expect(furthestOf(run.last, solution)).toBeLessThan(1e-7);
  });

  test("differences are right for any pattern", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 30 }),
        fc.integer({ min: 0, max: 3 }),
        fc.integer({ min: 1, max: 1e6 }),
        (n, links, seed) => {
          const { rhs, jacobian, pattern } = reacting(flowMatrix(n, links, seed), () => 3);
          const y = Float64Array.from({ length: n }, (_, i) => 1 / (1 + i));
          const f = new Float64Array(n);
          rhs(0, y, f);
          const found = jacobianOf({ size: n, rhs, pattern });
          found.evaluate(0, y, f, new Float64Array(n).fill(1e-9), 1e-3);
          const exact = new Float64Array(pattern.column.length);
          jacobian(0, y, exact);
          const size = Math.max(...exact.map(Math.abs));
          for (let k = 0; k < exact.length; k++) expect(Math.abs(found.value[k] - exact[k])).toBeLessThan(1e-5 * size);
        },
      ),
      { numRuns: 60 },
    );
  });

  test("columns of a group share no row; a tridiagonal matrix needs three groups", () => {
    const rows = Array.from(
      { length: 50 },
      (_, i) => new Map([i - 1, i, i + 1].filter((j) => j >= 0 && j < 50).map((j) => [j, 1])),
    );
    const line = sparseRows(rows);
    expect(separateColumns(line).count).toBe(3);
    const a = flowMatrix(60, 2, 8);
    const { group } = separateColumns(a);
    for (let i = 0; i < a.size; i++) {
      const row = [...a.column.slice(a.start[i], a.start[i + 1])].map((j) => group[j]);
      expect(new Set(row).size).toBe(row.length);
    }
  });

  test("one that is not finite ends the run", () => {
    const run = integrate({
      rhs: (_t, y, dy) => {
        dy[0] = -y[0];
      },
      jacobian: (_t, _y, entries) => {
        entries[0] = Number.NaN;
      },
      start: [1],
      from: 0,
      to: 1,
      method: "stiff",
    });
    expect(run.end).toEqual({ stopped: 0, why: "not-finite" });
  });
});
