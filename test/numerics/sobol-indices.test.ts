import { expect, test } from "vitest";
import { additiveShares } from "../../src/numerics/additive-shares.js";
import { lowDiscrepancy } from "../../src/numerics/low-discrepancy.js";
import { random } from "../../src/numerics/random.js";
import { sobolIndices } from "../../src/numerics/sobol-indices.js";
import { stratified } from "../../src/numerics/stratified.js";

/** T. Ishigami, T. Homma, Proc. ISUMA '90 (IEEE 1990) 398-403, with a = 7 and b = 0.1; its indices are closed forms. */
const ishigami = ([x, y, z]: readonly number[]): number =>
  Math.sin(x) + 7 * Math.sin(y) ** 2 + 0.1 * z ** 4 * Math.sin(x);
const p4 = Math.PI ** 4;
const variance = 49 / 8 + (0.1 * p4) / 5 + (0.01 * p4 * p4) / 18 + 0.5;
const first = [(0.5 * (1 + (0.1 * p4) / 5) ** 2) / variance, 49 / 8 / variance, 0];
const joint = (0.01 * p4 * p4 * (1 / 18 - 1 / 50)) / variance;
const total = [first[0] + joint, first[1], joint];

const angle = (u: number): number => Math.PI * (2 * u - 1);

test("first-order and total indices of the Ishigami function", () => {
  const n = 4096;
  const next = lowDiscrepancy(6, 3);
  const points = Array.from({ length: n }, () => Array.from(next(), angle));
  const [a, b] = [points.map((p) => p.slice(0, 3)), points.map((p) => p.slice(3))];
  const [fa, fb] = [a.map(ishigami), b.map(ishigami)];
  for (let i = 0; i < 3; i++) {
    const mixed = a.map((row, j) => ishigami(row.map((v, k) => (k === i ? b[j][k] : v))));
    const found = sobolIndices(fa, fb, mixed);
    expect(found?.first).toBeCloseTo(first[i], 1.6);
    expect(found?.total).toBeCloseTo(total[i], 1.6);
    expect(Math.abs((found?.first ?? 0) - first[i])).toBeLessThan(4 * (found?.error ?? 0));
  }
});

test("rows that have no number are passed over; what never varies has no indices", () => {
  const source = random(1);
  const draw = () => Array.from({ length: 500 }, () => source.uniform());
  const [a, b] = [draw(), draw()];
  const whole = sobolIndices(a.slice(1), b.slice(1), b.slice(1));
  expect(sobolIndices([Number.NaN, ...a.slice(1)], b, b)).toEqual(whole);
  expect(whole?.first).toBeCloseTo(1, 0.8);
  expect(sobolIndices([2, 2, 2], [2, 2, 2], [2, 2, 2])).toBeUndefined();
  expect(sobolIndices([1], [2], [3])).toBeUndefined();
});

test("a Latin hypercube has one point in every stratum, and the same for the same seed", () => {
  const column = stratified(50, random(4));
  expect([...column].map((u) => Math.floor(u * 50)).sort((x, y) => x - y)).toEqual([...Array(50).keys()]);
  expect(stratified(50, random(4))).toEqual(column);
  expect(stratified(50, random(5))).not.toEqual(column);
});

test("regression shares of a sum are those of its parts, add up to at most 1, and tell what they miss", () => {
  const n = 400;
  const [x, y, z] = [1, 2, 3].map((seed) => stratified(n, random(seed)));
  // Of independent uniform inputs: variances a2/12 and, of a centred square, 1/180.
  const sum = Array.from(x, (u, i) => 2 * u + y[i] + 3 * (z[i] - 0.5) ** 2);
  const parts = [4 / 12, 1 / 12, 9 / 180];
  const whole = parts[0] + parts[1] + parts[2];
  const found = additiveShares([[x], [y], [z]], sum);
  expect(found?.explained).toBeCloseTo(1, 10);
  parts.forEach((v, k) => {
    expect(found?.shares[k]).toBeCloseTo(v / whole, 1.3);
  });
  expect(found?.shares.reduce((s, v) => s + v, 0)).toBeLessThan(1 + 1e-12);
  // Two inputs of one group hold together what they hold each; the order of groups changes nothing.
  const grouped = additiveShares([[z], [y, x]], sum);
  expect(grouped?.shares[1]).toBeCloseTo((found?.shares[0] ?? 0) + (found?.shares[1] ?? 0), 10);
  // A product is no sum.
  const product = additiveShares(
    [[x], [y]],
    Array.from(x, (u, i) => (u - 0.5) * (y[i] - 0.5)),
  );
  expect(product?.explained).toBeLessThan(0.1);
});

test("too few rows, or nothing that varies, is no regression", () => {
  const x = [1, 2, 3, 4, 5];
  expect(additiveShares([[x], [x]], x)).toBeUndefined();
  expect(additiveShares([[stratified(99, random(1))]], new Float64Array(99))).toBeUndefined();
});
