/**
 * ln Gamma(x) for x > 0, to about 1e-15 relative of max(1, |value|).
 * @see C. Lanczos, J. SIAM Numer. Anal. B 1 (1964) 86-96; coefficients for g = 7, n = 9 (from memory, held by the tests)
 */
export function logGamma(x: number): number {
  if (!(x > 0)) return x === 0 ? Number.POSITIVE_INFINITY : Number.NaN;
  if (x > 16) return (x - 0.5) * Math.log(x) - x + halfLogTwoPi + stirlingError(x);
  if (x < 0.5) return Math.log(Math.PI / Math.sin(Math.PI * x)) - logGamma(1 - x);
  let sum = lanczos[0];
  for (let i = 1; i < lanczos.length; i++) sum += lanczos[i] / (x - 1 + i);
  const t = x + 6.5;
  return halfLogTwoPi + (x - 0.5) * Math.log(t) - t + Math.log(sum);
}

const halfLogTwoPi = 0.5 * Math.log(2 * Math.PI);
const lanczos = [
  0.9999999999998099, 676.5203681218851, -1259.1392167224028, 771.3234287776531, -176.6150291621406, 12.507343278686905,
  -0.13857109526572012, 9.984369578019572e-6, 1.5056327351493116e-7,
];

/** Smaller of a cumulative probability and what is left above it, both to full relative accuracy. */
export interface Tails {
  readonly below: number;
  readonly above: number;
}

/**
 * Regularised incomplete gamma functions P(a, x) and Q(a, x), a > 0, x >= 0.
 * @see W. Gautschi, ACM Trans. Math. Softw. 5 (1979) 466-481 (series below a + 1, Legendre's continued fraction above);
 *      C. Loader, Fast and accurate computation of binomial probabilities, 2000 (the factor in front, without cancellation)
 */
export function incompleteGamma(a: number, x: number): Tails {
  if (!(a > 0) || Number.isNaN(x)) return { below: Number.NaN, above: Number.NaN };
  if (x <= 0) return { below: 0, above: 1 };
  if (x === Number.POSITIVE_INFINITY) return { below: 1, above: 0 };
  const front = poissonTerm(a, x); // x^a e^-x / Gamma(a + 1)
  if (x < a + 1) {
    let term = 1;
    let sum = 1;
    for (let k = 1; term > sum * 1e-17; k++) {
      term *= x / (a + k);
      sum += term;
    }
    const below = Math.min(1, front * sum);
    return { below, above: 1 - below };
  }
  const above = Math.min(
    1,
    front *
      a *
      fraction(
        (k) => k * (a - k),
        (k) => x + 2 * k + 1 - a,
      ),
  );
  return { below: 1 - above, above };
}

/**
 * Regularised incomplete beta function I_x(a, b) and its complement, a, b > 0, 0 <= x <= 1.
 * @param y 1 - x, given apart so that neither end loses digits
 * @see NIST Digital Library of Mathematical Functions, 8.17.22 (continued fraction); Loader (2000) for the factor
 */
export function incompleteBeta(a: number, b: number, x: number, y = 1 - x): Tails {
  if (!(a > 0 && b > 0 && x >= 0 && y >= 0)) return { below: Number.NaN, above: Number.NaN };
  if (x === 0) return { below: 0, above: 1 };
  if (y === 0) return { below: 1, above: 0 };
  if (x > (a + 1) / (a + b + 2)) {
    const { below, above } = incompleteBeta(b, a, y, x);
    return { below: above, above: below };
  }
  const numerator = (k: number): number => {
    const m = k >> 1;
    if (k % 2 === 0) return (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    return (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
  };
  const below = Math.min(1, (betaTerm(a, b, x, y) / a) * fraction(numerator, () => 1));
  return { below, above: 1 - below };
}

/** 1 / (b(0) + a(1) / (b(1) + a(2) / (b(2) + ...))) (Lentz 1976, Thompson & Barnett 1986). */
function fraction(a: (k: number) => number, b: (k: number) => number): number {
  const tiny = 1e-300;
  let f = b(0) || tiny;
  let c = f;
  let d = 0;
  for (let k = 1; k < 1_000_000; k++) {
    d = 1 / (b(k) + a(k) * d || tiny);
    c = b(k) + a(k) / c || tiny;
    f *= c * d;
    if (Math.abs(c * d - 1) < 1e-16) break;
  }
  return 1 / f;
}

/** x^a e^-x / Gamma(a + 1), a, x > 0, to full relative accuracy. Loader (2000). */
export function poissonTerm(a: number, x: number): number {
  if (a < 1) return Math.exp(a * Math.log(x) - x - logGamma(a + 1));
  return Math.exp(-stirlingError(a) - deviance(a, x)) / Math.sqrt(2 * Math.PI * a);
}

/** x^a y^b / B(a, b) with x + y = 1 */
function betaTerm(a: number, b: number, x: number, y: number): number {
  const n = a + b;
  if (a < 1 || b < 1) {
    // Beside one far above 1, ln Gamma would lose digits: the other one is stepped up to where the formula below holds.
    const steppable = Math.max(a, b) > 16 && Math.min(x, y) > 1e-100;
    if (steppable && b < 1) return (betaTerm(a, b + 1, x, y) * b) / (y * n);
    if (steppable) return (betaTerm(a + 1, b, x, y) * a) / (x * n);
    return Math.exp(a * Math.log(x) + b * Math.log(y) - logGamma(a) - logGamma(b) + logGamma(n));
  }
  const error = stirlingError(n) - stirlingError(a) - stirlingError(b) - deviance(a, n * x) - deviance(b, n * y);
  return Math.exp(error) * Math.sqrt((a * b) / (2 * Math.PI * n));
}

/** ln Gamma(n + 1) minus Stirling's formula. */
function stirlingError(n: number): number {
  if (n <= 16) return logGamma(n + 1) - (n + 0.5) * Math.log(n) + n - halfLogTwoPi;
  const r = 1 / (n * n);
  return (1 / 12 - r * (1 / 360 - r * (1 / 1260 - r * (1 / 1680 - r * (1 / 1188 - (r * 691) / 360360))))) / n;
}

/** a ln(a / x) + x - a, without cancellation where x is near a. */
function deviance(a: number, x: number): number {
  const v = (a - x) / (a + x);
  if (Math.abs(v) > 0.1) return a * Math.log(a / x) + x - a;
  let sum = (a - x) * v;
  let power = 2 * a * v;
  for (let k = 3; ; k += 2) {
    power *= v * v;
    const next = sum + power / k;
    if (next === sum) return sum;
    sum = next;
  }
}
