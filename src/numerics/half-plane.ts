/** A complex number, written over by the function that gives it. */
export interface ComplexBuffer {
  re: number;
  im: number;
}

/** A function that is analytic to the right of a line and real on the real axis; its size may be scaled at each s by any positive number. */
export type Analytic = (re: number, im: number, out: ComplexBuffer) => void;

const mostEvaluations = 60_000;
/** Radians that a half step may turn, and by which two halves may differ from the whole. */
const widest = 0.9;
const agree = 0.2;
const shortest = 1e-9;

/** Part of a period of what swings fastest along the border that is taken in a step: a zero beside it is then not stepped over. */
const part = 0.15;

/**
 * Zeros of a function to the right of the line Re s = sigma within a radius, by the argument principle: how often its value
 * goes round 0 along the upper half of the border. Each step is seen to agree with its two halves.
 * @param delay of what swings fastest on the line, as exp(-s delay): no step is longer than a part of that
 * @returns undefined where the border could not be followed: a zero lies on it, or it is too long
 * @see the argument principle: L.V. Ahlfors, Complex Analysis, 3rd ed., McGraw-Hill 1979, sec. 5.2
 */
export function zerosRightOf(h: Analytic, sigma: number, radius: number, delay: number): number | undefined {
  const spent = { evaluations: 0 };
  const long = part / delay;
  const axis = turned(
    h,
    (t) => [sigma, t],
    radius,
    () => long,
    spent,
  );
  if (axis === undefined) return undefined;
  // From the axis on, away from which all that is delayed fades.
  const arc = turned(
    h,
    (t) => [sigma + radius * Math.sin(t), radius * Math.cos(t)],
    Math.PI / 2,
    (t) => long / radius + part * t,
    spent,
  );
  if (arc === undefined) return undefined;
  const half = -(arc + axis) / Math.PI;
  const count = Math.round(half);
  return Math.abs(half - count) < 0.02 && count >= 0 ? count + 0 : undefined;
}

/** By how many radians the value turns along a path from 0 to `end`, in steps no longer than `most` allows. */
function turned(
  h: Analytic,
  path: (t: number) => readonly [number, number],
  end: number,
  most: (t: number) => number,
  spent: { evaluations: number },
): number | undefined {
  const value = (t: number): ComplexBuffer => {
    spent.evaluations++;
    const out = { re: Number.NaN, im: Number.NaN };
    const [re, im] = path(t);
    h(re, im, out);
    return out;
  };
  let t = 0;
  let here = value(0);
  let sum = 0;
  let step = most(0) / 10;
  while (t < end) {
    if (spent.evaluations > mostEvaluations) return undefined;
    const to = Math.min(end, t + Math.min(step, most(t)));
    const [middle, next] = [value((t + to) / 2), value(to)];
    const [a, b, whole] = [angle(here, middle), angle(middle, next), angle(here, next)];
    if (Number.isNaN(a + b + whole)) return undefined;
    if (Math.abs(a) > widest || Math.abs(b) > widest || Math.abs(a + b - whole) > agree) {
      step = (to - t) / 3;
      if (step < shortest * end) return undefined;
      continue;
    }
    sum += a + b;
    t = to;
    here = next;
    if (Math.abs(a) + Math.abs(b) < widest) step = Math.min(1.7 * Math.min(step, most(t)), most(t));
  }
  return sum;
}

/** From one direction to another, -pi to pi. */
const angle = (a: ComplexBuffer, b: ComplexBuffer): number =>
  Math.atan2(a.re * b.im - a.im * b.re, a.re * b.re + a.im * b.im);

/**
 * Direction of the determinant of a complex matrix, scaled to size 1 pivot by pivot; 0 where it is singular. The matrix is
 * overwritten.
 * @param re n x n, row-major
 */
export function determinantDirection(re: Float64Array, im: Float64Array, n: number, out: ComplexBuffer): void {
  out.re = 1;
  out.im = 0;
  for (let k = 0; k < n; k++) {
    let pivot = k;
    let size = -1;
    for (let i = k; i < n; i++) {
      const here = Math.hypot(re[i * n + k], im[i * n + k]);
      if (here > size) [pivot, size] = [i, here];
    }
    if (!(size > 0)) {
      out.re = Number.NaN;
      out.im = Number.NaN;
      return;
    }
    if (pivot !== k) {
      for (let j = k; j < n; j++) {
        for (const m of [re, im]) [m[k * n + j], m[pivot * n + j]] = [m[pivot * n + j], m[k * n + j]];
      }
      out.re = -out.re;
      out.im = -out.im;
    }
    const [a, b] = [re[k * n + k] / size, im[k * n + k] / size];
    [out.re, out.im] = [out.re * a - out.im * b, out.re * b + out.im * a];
    const [inverseRe, inverseIm] = [a / size, -b / size];
    for (let i = k + 1; i < n; i++) {
      const [x, y] = [re[i * n + k], im[i * n + k]];
      if (x === 0 && y === 0) continue;
      const [lRe, lIm] = [x * inverseRe - y * inverseIm, x * inverseIm + y * inverseRe];
      for (let j = k + 1; j < n; j++) {
        const [u, v] = [re[k * n + j], im[k * n + j]];
        re[i * n + j] -= lRe * u - lIm * v;
        im[i * n + j] -= lRe * v + lIm * u;
      }
    }
  }
}
