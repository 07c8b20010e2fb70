/**
 * Numbers that a formula may be worked out in: written once, it gives complex values and Taylor coefficients alike.
 * Operations return new values and never change their arguments.
 */
export interface Algebra<T> {
  of(x: number): T;
  add(a: T, b: T): T;
  subtract(a: T, b: T): T;
  multiply(a: T, b: T): T;
  divide(a: T, b: T): T;
  scale(a: T, factor: number): T;
  exp(a: T): T;
  /** The root with a real part of zero or more. */
  sqrt(a: T): T;
  /** ln(1 + a), exact where a is small. */
  log1p(a: T): T;
  /** Magnitude; of a series, that of its value at the point. */
  size(a: T): number;
}

/**
 * cosh(sqrt u) and sinh(sqrt u)/sqrt u by their power series in u, which has no root in it: for |u| up to about 1.
 * @see NIST Digital Library of Mathematical Functions, 4.33
 */
export function evenHyperbolic<T>(u: T, { of, add, multiply, scale }: Algebra<T>): { cosh: T; sinhOver: T } {
  let cosh = of(1);
  let sinhOver = of(1);
  let term = of(1); // u^k / (2k)!
  for (let k = 1; k <= 14; k++) {
    term = scale(multiply(term, u), 1 / ((2 * k - 1) * (2 * k)));
    cosh = add(cosh, term);
    sinhOver = add(sinhOver, scale(term, 1 / (2 * k + 1)));
  }
  return { cosh, sinhOver };
}
