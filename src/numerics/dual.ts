import type { Algebra } from "./algebra.js";
import { type Complex, complex } from "./complex.js";

/** A complex number and its derivatives along some directions. */
export interface Dual {
  readonly value: Complex;
  readonly slopes: readonly Complex[];
}

const { add, subtract, multiply, divide, scale, exp, sqrt, log1p, size } = complex;

/** The slope of what does not move; told by itself, it costs nothing. */
const none: Complex = complex.of(0);

/** A number that does not move, or that moves along one direction only: by 1 per unit of it. */
export function dualOf(value: Complex, directions: number, along = -1): Dual {
  const slopes: Complex[] = [];
  for (let j = 0; j < directions; j++) slopes.push(j === along ? one : none);
  return { value, slopes };
}

const one: Complex = complex.of(1);
const plus = (a: Complex, b: Complex): Complex => (a === none ? b : b === none ? a : add(a, b));
const times = (a: Complex, slope: Complex): Complex => (slope === none ? none : multiply(a, slope));

/**
 * Complex numbers with first derivatives as an algebra: forward differentiation, exact but for rounding.
 * @see A. Griewank, A. Walther, Evaluating Derivatives, 2nd ed., SIAM 2008, ch. 3
 */
export function dual(directions: number): Algebra<Dual> {
  /** f(a), whose derivative at the point is known. */
  const chain = (value: Complex, slope: Complex, a: Dual): Dual => ({
    value,
    slopes: a.slopes.map((x) => times(slope, x)),
  });
  const still: readonly Complex[] = dualOf(none, directions).slopes;
  return {
    of: (x) => ({ value: complex.of(x), slopes: still }),
    add: (a, b) => ({ value: add(a.value, b.value), slopes: a.slopes.map((x, j) => plus(x, b.slopes[j])) }),
    subtract: (a, b) => ({
      value: subtract(a.value, b.value),
      slopes: a.slopes.map((x, j) => (b.slopes[j] === none ? x : subtract(x, b.slopes[j]))),
    }),
    multiply: (a, b) => ({
      value: multiply(a.value, b.value),
      slopes: a.slopes.map((x, j) => plus(times(b.value, x), times(a.value, b.slopes[j]))),
    }),
    divide(a, b) {
      const value = divide(a.value, b.value);
      return {
        value,
        slopes: a.slopes.map((x, j) => {
          if (b.slopes[j] !== none) return divide(subtract(x, multiply(value, b.slopes[j])), b.value);
          return x === none ? none : divide(x, b.value);
        }),
      };
    },
    scale: (a, factor) => ({
      value: scale(a.value, factor),
      slopes: a.slopes.map((x) => (x === none ? none : scale(x, factor))),
    }),
    exp(a) {
      const value = exp(a.value);
      return chain(value, value, a);
    },
    sqrt(a) {
      const value = sqrt(a.value);
      return chain(value, divide(complex.of(0.5), value), a);
    },
    log1p: (a) => chain(log1p(a.value), divide(complex.of(1), add(complex.of(1), a.value)), a),
    size: (a) => size(a.value),
  };
}
