import { readFileSync } from "node:fs";
import type { IntegrateOptions } from "../../src/numerics/integrate.js";
import { formula } from "./infix.js";

export interface OdeProblem {
  readonly problem: IntegrateOptions;
  readonly solution: readonly number[];
}

/** Initial-value problems with published or multiply computed end values; sources inside the files. */
interface Reference {
  readonly equations: Readonly<Record<string, string>>;
  readonly constants?: Readonly<Record<string, string>>;
  readonly initial_values: readonly string[];
  readonly t_start: number | string;
  readonly t_end: number | string;
  readonly reference_solution: readonly string[];
}

export function reference(name: string): OdeProblem {
  const path = new URL(`../../shared/reference/ode-problems/${name}.json`, import.meta.url);
  const file = JSON.parse(readFileSync(path, "utf8")) as Reference;
  const names: Record<string, number> = {};
  for (const [key, value] of Object.entries(file.constants ?? {})) names[key] = Number(value);
  const formulas = file.initial_values.map((_, i) => formula(file.equations[`dy${i + 1}/dt`]));
  const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
    y.forEach((v, i) => {
      names[`y${i + 1}`] = v;
    });
    formulas.forEach((f, i) => {
      dy[i] = f(names);
    });
  };
  const start = file.initial_values.map(Number);
  const problem = { rhs, start, from: Number(file.t_start), to: Number(file.t_end) };
  return { problem, solution: file.reference_solution.map(Number) };
}

/** Oregonator: R.J. Field, R.M. Noyes, J. Chem. Phys. 60 (1974) 1877; end values of the Test Set for IVP Solvers, from memory. */
export const oregonator: OdeProblem = {
  problem: {
    rhs: (_t, y, dy) => {
      dy[0] = 77.27 * (y[1] - y[0] * y[1] + y[0] - 8.375e-6 * y[0] * y[0]);
      dy[1] = (-y[1] - y[0] * y[1] + y[2]) / 77.27;
      dy[2] = 0.161 * (y[0] - y[2]);
    },
    start: [1, 2, 3],
    from: 0,
    to: 360,
  },
  solution: [0.1000814870318523e1, 0.1228178521549917e4, 0.1320554942846706e3],
};

/** Van der Pol's oscillator with mu^2 = 1e6 on the slow time; end values of the Test Set for IVP Solvers, from memory. */
export const vanDerPol: OdeProblem = {
  problem: {
    rhs: (_t, y, dy) => {
      dy[0] = y[1];
      dy[1] = 1e6 * ((1 - y[0] * y[0]) * y[1] - y[0]);
    },
    start: [2, 0],
    from: 0,
    to: 2,
  },
  solution: [0.1706167732170483e1, -0.8928097010247975],
};

/** Largest |y - ref| / (0.01 + |ref|). */
export const furthestOf = (y: ArrayLike<number>, solution: readonly number[]): number =>
  Math.max(...solution.map((v, i) => Math.abs(y[i] - v) / (0.01 + Math.abs(v))));
