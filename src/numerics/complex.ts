import type { Algebra } from "./algebra.js";

/** A complex number. */
export interface Complex {
  readonly re: number;
  readonly im: number;
}

/** Complex numbers as an algebra. */
export const complex: Algebra<Complex> = {
  of: (x) => ({ re: x, im: 0 }),
  add: (a, b) => ({ re: a.re + b.re, im: a.im + b.im }),
  subtract: (a, b) => ({ re: a.re - b.re, im: a.im - b.im }),
  multiply: (a, b) => ({ re: a.re * b.re - a.im * b.im, im: a.re * b.im + a.im * b.re }),
  divide,
  scale: (a, factor) => ({ re: a.re * factor, im: a.im * factor }),
  exp(a) {
    const size = Math.exp(a.re);
    if (a.im === 0 || size === 0) return { re: size, im: 0 };
    return { re: size * Math.cos(a.im), im: size * Math.sin(a.im) };
  },
  sqrt,
  log1p: ({ re, im }) => ({ re: 0.5 * Math.log1p(re * (2 + re) + im * im), im: Math.atan2(im, 1 + re) }),
  size: (a) => Math.hypot(a.re, a.im),
};

/** a / b without overflow on the way. R.L. Smith, Commun. ACM 5 (1962) 435. */
function divide(a: Complex, b: Complex): Complex {
  if (b.im === 0) return { re: a.re / b.re, im: a.im / b.re };
  if (Math.abs(b.re) >= Math.abs(b.im)) {
    const r = b.im / b.re;
    const d = b.re + b.im * r;
    return { re: (a.re + a.im * r) / d, im: (a.im - a.re * r) / d };
  }
  const r = b.re / b.im;
  const d = b.re * r + b.im;
  return { re: (a.re * r + a.im) / d, im: (a.im * r - a.re) / d };
}

function sqrt({ re, im }: Complex): Complex {
  if (re === 0 && im === 0) return { re: 0, im: 0 };
  const half = Math.sqrt((Math.abs(re) + Math.hypot(re, im)) / 2);
  const other = Math.abs(im) / (2 * half);
  if (re >= 0) return { re: half, im: im < 0 ? -other : other };
  return { re: other, im: im < 0 ? -half : half };
}
