import { type Dimension, dimensions, toPower } from "../units/dimension.js";
import type { Expression } from "./ast.js";
import { call, difference, negative, number, power, product, quotient, sum } from "./build.js";

/** All about one function: what it takes, what it gives, and its derivative. */
export interface MathFunction {
  /** One sentence for the manual, and a call as one would write it; only what a file may call has them. */
  readonly says?: string;
  readonly example?: string;
  readonly least: number;
  readonly most: number;
  /** "pure": takes pure numbers. "alike": all arguments of one dimension, whatever it is. */
  readonly takes: "pure" | "alike";
  readonly gives: (argument: Dimension) => Dimension;
  /** The value; the array is reused by the caller. */
  readonly value: (x: readonly number[]) => number;
  /** The derivative, from the arguments and their derivatives. At a kink: that of a growing argument. */
  readonly derivative: (args: readonly Expression[], slopes: readonly Expression[]) => Expression;
}

const ratio = (): Dimension => dimensions.ratio;
const same = (d: Dimension): Dimension => d;

const pure = (
  value: (x: number) => number,
  slope: (a: Expression) => Expression,
  says: string,
  example: string,
): MathFunction => ({
  says,
  example,
  least: 1,
  most: 1,
  takes: "pure",
  gives: ratio,
  value: ([x]) => value(x),
  derivative: ([a], [da]) => product(slope(a), da),
});

/** The functions that a file may call. */
export const functions: Readonly<Record<string, MathFunction>> = {
  exp: pure(Math.exp, (a) => call("exp", a), "e to this power.", "exp(0.5)"),
  log: pure(Math.log, (a) => quotient(number(1), a), "The natural logarithm.", "log(2)"),
  log10: pure(Math.log10, (a) => quotient(number(1 / Math.LN10), a), "The logarithm to base 10.", "log10(1000)"),
  tanh: pure(Math.tanh, (a) => bell(a), "The hyperbolic tangent.", "tanh(0.5)"),
  sqrt: {
    says: "The square root; of an area it is a length.",
    example: "sqrt(4 m2)",
    least: 1,
    most: 1,
    takes: "alike",
    gives: (d) => toPower(d, 0.5),
    value: ([x]) => Math.sqrt(x),
    derivative: ([a], [da]) => quotient(da, product(number(2), call("sqrt", a))),
  },
  abs: {
    says: "The size without its sign.",
    example: "abs(3 L - 5 L)",
    least: 1,
    most: 1,
    takes: "alike",
    gives: same,
    value: ([x]) => Math.abs(x),
    derivative: ([a], [da]) => call("of-the-largest", a, negative(a), da, negative(da)),
  },
  min: {
    says: "The smallest of several values of one kind.",
    example: "min(100 L, 2 L)",
    least: 1,
    most: 99,
    takes: "alike",
    gives: same,
    value: (x) => Math.min(...x),
    derivative: (args, slopes) => call("of-the-smallest", ...args, ...slopes),
  },
  max: {
    says: "The largest of several values of one kind.",
    example: "max(100 L, 2 L)",
    least: 1,
    most: 99,
    takes: "alike",
    gives: same,
    value: (x) => Math.max(...x),
    derivative: (args, slopes) => call("of-the-largest", ...args, ...slopes),
  },
  /** From 0 to 1 as x passes `at`: (1 + tanh((x - at) / width)) / 2, so 12 % to 88 % within one width on either side. */
  "step-up": {
    says: "A smooth switch from 0 to 1 as the first passes the second: 12 % to 88 % within one width (the third) on either side.",
    example: "step-up(300 K, 310 K, 5 K)",
    least: 3,
    most: 3,
    takes: "alike",
    gives: ratio,
    value: ([x, at, width]) => (1 + Math.tanh((x - at) / width)) / 2,
    derivative: ([x, at, width], [dx, dat, dwidth]) => {
      const u = quotient(difference(x, at), width);
      const du = quotient(difference(difference(dx, dat), product(u, dwidth)), width);
      return product(product(number(0.5), bell(u)), du);
    },
  },
};

/** Functions that only derivatives call: the slope that belongs to the largest or smallest; at a tie, its right side. */
const choosers: Readonly<Record<string, MathFunction>> = {
  "of-the-largest": chooser("of-the-largest", 1),
  "of-the-smallest": chooser("of-the-smallest", -1),
};

/** Looks up a function, those of derivatives too. */
export const functionNamed = (name: string): MathFunction | undefined => {
  const table = Object.hasOwn(functions, name) ? functions : choosers;
  return Object.hasOwn(table, name) ? table[name] : undefined;
};

/** 1 - tanh^2, without the loss of digits at large arguments. */
function bell(a: Expression): Expression {
  const e = call("exp", product(number(-2), call("abs", a)));
  return quotient(product(number(4), e), power(sum(number(1), e), number(2)));
}

function chooser(name: string, sign: number): MathFunction {
  return {
    least: 2,
    most: 198,
    takes: "alike",
    gives: same,
    value: (x) => {
      const n = x.length / 2;
      let best = 0;
      for (let i = 1; i < n; i++) {
        const ahead = sign * (x[i] - x[best]);
        if (ahead > 0 || (ahead === 0 && sign * (x[n + i] - x[n + best]) > 0)) best = i;
      }
      return x[n + best];
    },
    derivative: (args, slopes) => {
      const n = args.length / 2;
      return call(name, ...args.slice(0, n), ...slopes.slice(n));
    },
  };
}
