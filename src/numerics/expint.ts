import { type Complex, complex } from "./complex.js";

const euler = 0.5772156649015329;
const { add, multiply, divide, scale, exp } = complex;

/**
 * e^z E_n(z), the exponential integral of order n = 1, 2, 3, ... without its exponential fall; principal branch (cut along
 * the negative real axis, where the value is that of its upper side). To about 1e-14.
 * @see NIST Digital Library of Mathematical Functions, 8.19.8 (series), 8.19.17 (continued fraction), 8.20.2 (large |z|)
 */
export function scaledExpint(n: number, z: Complex): Complex {
  const size = Math.hypot(z.re, z.im);
  if (size === 0) return { re: n > 1 ? 1 / (n - 1) : Number.POSITIVE_INFINITY, im: 0 };
  // The fraction converges slowly near the cut, the series cancels far from it; this parabola keeps both good.
  if (size + z.re >= 2) return fraction(n, z);
  return size < 60 ? multiply(exp(z), series(n, z)) : asymptotic(n, z);
}

/** Beyond this size, the asymptotic series of the slope is exact to round-off. */
const large = 50;

/**
 * d/dz of e^z E_n(z), n = 2, 3, ..., from that value: e^z (E_n - E_(n-1)), or beyond |z| = 50 (right of the imaginary axis) its asymptotic series,
 * since the difference cancels there.
 * @see NIST Digital Library of Mathematical Functions, 8.19.12, 8.19.14, 8.20.2
 */
export function scaledExpintSlope(n: number, z: Complex, value = scaledExpint(n, z)): Complex {
  const size = complex.size(z);
  if (size < 1) return complex.subtract(value, scaledExpint(n - 1, z));
  if (z.re < 0 || size < large)
    return complex.subtract(value, divide(complex.subtract(complex.of(1), scale(value, n - 1)), z));
  const over = divide({ re: 1, im: 0 }, z);
  let term = scale(multiply(over, over), -1);
  let sum = term;
  for (let k = 1; k < 40; k++) {
    term = multiply(scale(term, (-(k + n - 1) * (k + 1)) / k), over);
    sum = add(sum, term);
    if (complex.size(term) < 1e-17 * complex.size(sum)) break;
  }
  return sum;
}

/** Even part of the continued fraction, by the modified method of Lentz (Thompson & Barnett 1986). */
function fraction(n: number, z: Complex): Complex {
  let b: Complex = { re: z.re + n, im: z.im };
  let c: Complex = { re: 1e300, im: 0 };
  let d = divide({ re: 1, im: 0 }, b);
  let h = d;
  for (let i = 1; i < 100_000; i++) {
    const a = -i * (n - 1 + i);
    b = { re: b.re + 2, im: b.im };
    d = divide({ re: 1, im: 0 }, add(scale(d, a), b));
    c = add(b, divide({ re: a, im: 0 }, c));
    const factor = multiply(c, d);
    h = multiply(h, factor);
    if (Math.abs(factor.re - 1) + Math.abs(factor.im) < 2e-16) break;
  }
  return h;
}

/** E_n by its power series, which holds a logarithm. */
function series(n: number, z: Complex): Complex {
  const minus: Complex = { re: -z.re, im: -z.im };
  let psi = -euler;
  for (let k = 1; k < n; k++) psi += 1 / k;
  const log: Complex = { re: Math.log(Math.hypot(z.re, z.im)), im: Math.atan2(z.im, z.re) };
  let power: Complex = { re: 1, im: 0 }; // (-z)^k / k!
  let sum: Complex = { re: 0, im: 0 };
  for (let k = 0; k < 400; k++) {
    if (k > 0) power = scale(multiply(power, minus), 1 / k);
    const term = k === n - 1 ? multiply(power, { re: psi - log.re, im: -log.im }) : scale(power, -1 / (1 - n + k));
    sum = add(sum, term);
    if (k >= n && complex.size(term) < 1e-17 * complex.size(sum)) break;
  }
  return sum;
}

function asymptotic(n: number, z: Complex): Complex {
  let term = divide({ re: 1, im: 0 }, z);
  let sum = term;
  for (let k = 1; k < 50; k++) {
    term = divide(scale(term, -(n + k - 1)), z);
    sum = add(sum, term);
  }
  return sum;
}
