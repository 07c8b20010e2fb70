import { bandedSolver, bandwidth } from "./banded-lu.js";
import { bandedComplexSolver } from "./banded-lu-complex.js";
import { denseComplexSolver } from "./complex-lu.js";
import { denseSolver } from "./dense-lu.js";
import type { ComplexLinearSolver, LinearSolver, Pattern } from "./linear-solver.js";
import { minimumDegree } from "./ordering.js";
import { sparseSolver } from "./sparse-lu.js";
import { sparseComplexSolver } from "./sparse-lu-complex.js";
import type { Jacobian } from "./stiff-jacobian.js";

/** The systems (shift - J) x = b of an implicit step: one real, some complex. */
export interface ShiftedSystems {
  readonly real: LinearSolver;
  readonly complex: readonly ComplexLinearSolver[];
  /** Rough number of operations of factoring them all, and of solving them all once. */
  readonly work: { readonly factor: number; readonly solve: number };
  /** Factors them all; false where one is singular or not finite. No allocation once pivots are chosen. */
  factor(
    jacobian: Jacobian,
    real: number,
    complex: readonly { readonly re: number; readonly im: number }[],
    h: number,
  ): boolean;
}

/** @param pairs how many complex systems */
export function shiftedSystems({ pattern, diagonal }: Jacobian, pairs: number): ShiftedSystems {
  const make = suited(pattern);
  const options = make === sparse ? { tiny: 0, order: minimumDegree(pattern) } : { tiny: 0 };
  const real = make.real(pattern, options);
  const complex = Array.from({ length: pairs }, () => make.complex(pattern, options));
  const re = new Float64Array(pattern.column.length);
  const im = new Float64Array(pattern.column.length);
  const entries = pattern.column.length;
  const n = pattern.size;
  // A complex operation is four real ones. Sparse: fill and elimination as flow networks have them.
  const each = 1 + 4 * pairs;
  const work =
    make === dense
      ? { factor: (each * 2 * n ** 3) / 3, solve: each * 2 * n * n }
      : { factor: each * 20 * entries, solve: each * 6 * entries };
  return {
    real,
    complex,
    work,
    factor(jacobian, shift, shifts, h) {
      for (let k = 0; k < re.length; k++) re[k] = -jacobian.value[k];
      for (let i = 0; i < n; i++) re[diagonal[i]] += shift / h;
      if (!real.factor(re)) return false;
      for (let p = 0; p < pairs; p++) {
        const shiftRe = shifts[p].re / h;
        const shiftIm = shifts[p].im / h;
        for (let i = 0; i < n; i++) {
          re[diagonal[i]] = shiftRe - jacobian.value[diagonal[i]];
          im[diagonal[i]] = shiftIm;
        }
        if (!complex[p].factor(re, im)) return false;
      }
      return true;
    },
  };
}

const dense = { real: denseSolver, complex: denseComplexSolver };
const banded = { real: bandedSolver, complex: bandedComplexSolver };
const sparse = { real: sparseSolver, complex: sparseComplexSolver };

/** By a count of the work: small or full matrices dense, narrow bands as bands, others sparse. */
function suited(pattern: Pattern): typeof dense | typeof banded | typeof sparse {
  const { size: n } = pattern;
  const entries = pattern.column.length;
  if (n <= 8 || entries > 0.4 * n * n) return dense;
  const { below, above } = bandwidth(pattern);
  const room = 2 * below + above + 1;
  return room * n <= 2 * entries ? banded : sparse;
}
