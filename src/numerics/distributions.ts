import { brent } from "./roots.js";
import { incompleteBeta, incompleteGamma, type Tails } from "./special-functions.js";

/** P(Z <= z), standard normal; both tails to full relative accuracy. */
export function normalCdf(z: number): number {
  const { above } = incompleteGamma(0.5, (z * z) / 2);
  return z < 0 ? above / 2 : 1 - above / 2;
}

/** z with P(Z <= z) = p; -Infinity and Infinity at 0 and 1, NaN outside. */
export function normalQuantile(p: number): number {
  const tail = (z: number): Tails => ({ below: 1 - normalCdf(-z), above: normalCdf(-z) });
  return p < 0.5 ? -fromMiddle(tail, p) : fromMiddle(tail, 1 - p);
}

/** P(T <= t), Student's t with `freedom` degrees, above 0. */
export function studentTCdf(t: number, freedom: number): number {
  const { above } = studentTails(Math.abs(t), freedom);
  return t < 0 ? above : 1 - above;
}

/** t with P(T <= t) = p. */
export function studentTQuantile(p: number, freedom: number): number {
  const tail = (t: number): Tails => studentTails(t, freedom);
  return p < 0.5 ? -fromMiddle(tail, p) : fromMiddle(tail, 1 - p);
}

/** P(X <= x), chi-square with `freedom` degrees, above 0. */
export const chiSquareCdf = (x: number, freedom: number): number => incompleteGamma(freedom / 2, x / 2).below;

/** x with P(X <= x) = p. */
export const chiSquareQuantile = (p: number, freedom: number): number =>
  positiveQuantile((x) => incompleteGamma(freedom / 2, x / 2), p, freedom);

/** P(F <= f), Fisher's F with d1 and d2 degrees of freedom, above 0. */
export const fCdf = (f: number, d1: number, d2: number): number => fTails(f, d1, d2).below;

/** P(F > f), to its own digits. */
export const fTail = (f: number, d1: number, d2: number): number => fTails(f, d1, d2).above;

/** f with P(F <= f) = p. */
export const fQuantile = (p: number, d1: number, d2: number): number =>
  positiveQuantile((f) => fTails(f, d1, d2), p, 1);

/** Tails of |t| >= 0 on one side. */
function studentTails(t: number, freedom: number): Tails {
  if (t === Number.POSITIVE_INFINITY) return { below: 1, above: 0 };
  const square = t * t;
  const whole = freedom + square;
  const above = incompleteBeta(freedom / 2, 0.5, freedom / whole, square / whole).below / 2;
  return { below: 1 - above, above };
}

function fTails(f: number, d1: number, d2: number): Tails {
  if (f <= 0) return { below: 0, above: 1 };
  const whole = d1 * f + d2;
  return incompleteBeta(d1 / 2, d2 / 2, (d1 * f) / whole, d2 / whole);
}

/** z >= 0 of a symmetric distribution with the tail `above` of at most 1/2. */
function fromMiddle(tails: (z: number) => Tails, above: number): number {
  if (!(above >= 0 && above <= 0.5)) return Number.NaN;
  if (above === 0.5) return 0;
  if (above === 0) return Number.POSITIVE_INFINITY;
  return whereTail((z) => tails(z).above, above, 1);
}

/** x > 0 with P(X <= x) = p, by whichever tail is the smaller. */
function positiveQuantile(tails: (x: number) => Tails, p: number, middle: number): number {
  if (!(p >= 0 && p <= 1)) return Number.NaN;
  if (p === 0) return 0;
  if (p === 1) return Number.POSITIVE_INFINITY;
  return p < 0.5 ? whereTail((x) => tails(x).below, p, middle) : whereTail((x) => tails(x).above, 1 - p, middle);
}

/** Where a monotone tail has the value wanted: a bracket by doubling about `middle`, then Brent on logarithms. */
function whereTail(tail: (x: number) => number, wanted: number, middle: number): number {
  const off = (logX: number): number => Math.log(Math.max(tail(Math.exp(logX)), 1e-320) / wanted);
  let low = Math.log(middle) - 1;
  let high = low + 2;
  const sign = Math.sign(off(high) - off(low)) || 1;
  for (let reach = 1; off(low) * sign > 0 && reach < 1e4; reach *= 2) low -= reach;
  for (let reach = 1; off(high) * sign < 0 && reach < 1e4; reach *= 2) high += reach;
  const root = brent(off, low, high, 1e-15);
  return root === "no-sign-change" ? Number.NaN : Math.exp(root);
}
