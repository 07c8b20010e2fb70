/**
 * A zero of a continuous function between two points of different sign, by Brent's method; a jump through 0 counts as a zero.
 * @param tolerance absolute, on x; default 0: to rounding
 * @returns "no-sign-change" where f has the same sign, or NaN, at both ends
 * @see R.P. Brent, Algorithms for Minimization without Derivatives, Prentice-Hall 1973, ch. 4
 */
export function brent(f: (x: number) => number, from: number, to: number, tolerance = 0): number | "no-sign-change" {
  let a = from;
  let b = to;
  let fa = f(a);
  let fb = f(b);
  if (fa === 0) return a;
  if (fb === 0) return b;
  if (!(fa * Math.sign(fb) < 0)) return "no-sign-change";
  let c = a;
  let fc = fa;
  let step = b - a;
  let before = step;
  for (let round = 0; round < 300; round++) {
    if (Math.sign(fb) === Math.sign(fc)) {
      c = a;
      fc = fa;
      step = b - a;
      before = step;
    }
    if (Math.abs(fc) < Math.abs(fb)) {
      [a, b, c] = [b, c, b];
      [fa, fb, fc] = [fb, fc, fb];
    }
    const near = 2 * Number.EPSILON * Math.abs(b) + tolerance / 2;
    const half = (c - b) / 2;
    if (Math.abs(half) <= near || fb === 0) return b;
    const next =
      Math.abs(before) >= near && Math.abs(fa) > Math.abs(fb) ? interpolated(a, b, c, fa, fb, fc) : undefined;
    if (next !== undefined && 2 * Math.abs(next) < Math.min(3 * Math.abs(half) - near, Math.abs(before))) {
      // Only a step towards c, inside three quarters of the way, is trusted.
      if (next * half > 0) {
        before = step;
        step = next;
      } else {
        before = half;
        step = half;
      }
    } else {
      before = half;
      step = half;
    }
    a = b;
    fa = fb;
    b += Math.abs(step) > near ? step : Math.sign(half) * near;
    fb = f(b);
  }
  return b;
}

/** Step from b by inverse quadratic interpolation, or the secant where only two points are known. */
function interpolated(a: number, b: number, c: number, fa: number, fb: number, fc: number): number {
  const s = fb / fa;
  if (a === c) return ((c - b) * s) / (s - 1);
  const q = fa / fc;
  const r = fb / fc;
  return (-s * ((c - b) * q * (q - r) - (b - a) * (r - 1))) / ((q - 1) * (r - 1) * (s - 1));
}
