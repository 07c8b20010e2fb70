import { expect, test } from "vitest";
import { dot, norm } from "../../src/fit/basis.js";
import { condense, stillStands } from "../../src/fit/condense.js";
import { estimatesOf } from "../../src/fit/estimates.js";
import { fullJacobian } from "../../src/fit/jacobian.js";
import { networkModel } from "../../src/fit/network-model.js";
import { prepare } from "../../src/fit/prepare.js";
import { problemWith } from "../../src/fit/problem.js";
import { descend, fully } from "../../src/fit/search.js";
import { weightsFor } from "../../src/fit/weights.js";
import { random } from "../../src/numerics/random.js";
import { networkOf, trialOf } from "./load.js";
import { vessel } from "./slope-errors.js";

const network = networkOf(
  vessel(
    "  a: {kind: junction, to: {tube: rest, out: bypass}}\n  tube: {kind: tubular, volume: riser, to: tank}\n  tank: {kind: stirred, volume: 600 L, to: out, exchange: {corner: q}}\n  corner: {kind: stirred, volume: 250 L}",
    "parameters: {bypass: {value: 0.12, between: [0, 0.9]}, riser: {value: 150.13 L, between: [1 L, 480 L]}, q: {value: 1.5 L/min, between: [0.01 L/min, 50 L/min]}}\n",
  ),
);
const n = 12_000;
const minutes = Array.from({ length: n }, (_, i) => (600 * (i + 0.5)) / n);
const header = `trial: Logged
format: 1
injection: {at: feed, pulse: 50 g, start: 0 min, lasting: 2 min}
readings: [{at: out, file: d.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}, baseline: drift, scale: free, noise: {relative: 2 %, floor: 0.5 mg/L}}]
`;
const trialWith = (values: ArrayLike<number>) =>
  trialOf(header, () => `t,c\n${minutes.map((t, i) => `${t},${values[i]}`).join("\n")}\n`);

/** The curve at the file's values with noise and a baseline that drifts. */
function logged(): ReturnType<typeof trialWith> {
  const bare = trialWith(new Float64Array(n).fill(1));
  const [curve] = networkModel(network).respond(bare, {}, [{ time: Float64Array.from(minutes, (t) => 60 * t) }]) ?? [];
  const draw = random(5);
  return trialWith(Float64Array.from(curve, (c, i) => c + 2e-3 + 1e-6 * minutes[i] + 6e-4 * draw.normal()));
}

const trial = logged();
const setup = prepare(networkModel(network), network, [trial], undefined, () => {});
if (!setup) throw new Error("no setup");
const problem = problemWith(setup, weightsFor(setup).weight);
const truth = Float64Array.from(setup.coordinates, (c) => c.fromSi(c.start));
const unwatched = { cancelled: () => false, progress: () => {} };
const close = condense(problem, truth, 40);

test("few points that stand for many rise as they do, and end where they end", () => {
  if (!close) throw new Error("not condensed");
  expect(close.setup.observations).toBeLessThan(n / 6);
  const least = problem.evaluate(truth)?.ofAll ?? Number.NaN;
  const leastOfFew = close.evaluate(truth)?.ofAll ?? Number.NaN;
  const variance = least / n;
  const draw = random(9);
  for (let k = 0; k < 20; k++) {
    const x = truth.map((u) => u + 2e-4 * draw.normal());
    const rise = (problem.evaluate(x)?.ofAll ?? Number.NaN) - least;
    const few = (close.evaluate(x)?.ofAll ?? Number.NaN) - leastOfFew;
    expect(Math.abs(few - rise)).toBeLessThan(1e-5 * variance);
  }
  const all = descend(problem, truth, fully, unwatched);
  const byFew = descend(close, truth, fully, unwatched);
  expect(all.converged && byFew.converged).toBe(true);
  for (const [j, u] of all.x.entries()) expect(Math.abs(byFew.x[j] - u)).toBeLessThan(1e-9);
});

test("errors from few points are those of all, and where fronts have moved too far they stand for nothing", () => {
  if (!close) throw new Error("not condensed");
  const { x } = descend(close, truth, fully, unwatched);
  const at = problem.evaluate(x);
  if (!at) throw new Error("no vessel");
  expect(stillStands(close, problem, x)).toBe(at);
  const there = close.evaluate(x);
  if (!there) throw new Error("no vessel");
  const [whole, less] = [fullJacobian(problem, x, at), fullJacobian(close, x, there)];
  for (const [j, a] of whole.entries())
    for (const [k, b] of whole.entries())
      expect(Math.abs(dot(less[j], less[k]) - dot(a, b))).toBeLessThan(1e-7 * norm(a) * norm(b));
  const settled = { problem, weights: weightsFor(setup), x, at, converged: true };
  const [all, few] = [estimatesOf(settled), estimatesOf(settled, close)];
  expect(few.variance).toBe(all.variance);
  for (const [j, p] of all.parameters.entries()) {
    const relative = (few.parameters[j].standardError ?? Number.NaN) / (p.standardError ?? Number.NaN) - 1;
    expect(Math.abs(relative)).toBeLessThan(1e-6);
  }
  for (const [j, row] of all.correlation.rows.entries())
    for (const [k, r] of row.entries()) expect(few.correlation.rows[j][k]).toBeCloseTo(r, 6);
  const riser = setup.coordinates.findIndex((c) => c.name === "riser");
  const far = Float64Array.from(x, (u, j) => (j === riser ? u + 0.1 : u));
  expect(stillStands(close, problem, far)).toBeUndefined();
});

test("what stands for censored readings, or saves little, is not made", () => {
  const censored = { ...setup.blocks[0], censored: new Int8Array(n) };
  expect(condense(problemWith({ ...setup, blocks: [censored] }, problem.weight), truth, 40)).toBeUndefined();
  expect(condense(problem, truth, n)).toBeUndefined();
});
