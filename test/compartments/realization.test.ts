import { expect, test } from "vitest";
import type { Realization } from "../../src/compartments/realization.js";
import { type Complex, complex } from "../../src/numerics/complex.js";
import { denseComplexSolver } from "../../src/numerics/complex-lu.js";
import { fullPattern } from "../../src/numerics/linear-solver.js";
import { plantOf } from "../simulate/plants.js";
import { vessel } from "../transfer/vessel.js";

/** c (s - Q A - S)^-1 Q b + d behind the delay, by elimination. */
function transferOf(r: Realization, s: Complex, flow: number): Complex {
  const n = r.input.length;
  const re = new Float64Array(n * n);
  const im = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    for (const [part, factor] of [
      [r.through, flow],
      [r.still, 1],
    ] as const) {
      for (let k = part.start[i]; k < part.start[i + 1]; k++) re[i * n + part.column[k]] -= factor * part.value[k];
    }
    re[i * n + i] += s.re;
    im[i * n + i] += s.im;
  }
  const solver = denseComplexSolver(fullPattern(n), { tiny: 0 });
  expect(solver.factor(re, im)).toBe(true);
  const x = r.input.map((b) => b * flow);
  const y = new Float64Array(n);
  solver.solve(x, y);
  let out = complex.of(r.direct);
  r.output.forEach((c, i) => {
    out = complex.add(out, { re: c * x[i], im: c * y[i] });
  });
  return complex.multiply(out, complex.exp(complex.scale(s, -r.delay / flow)));
}

const bodies = {
  "closed, Péclet 0.01": "dispersed, volume: 2 L, peclet: 0.01",
  "closed, Péclet 3": "dispersed, volume: 2 L, peclet: 3",
  "closed, Péclet 400": "dispersed, volume: 2 L, peclet: 400",
  "open, Péclet 0.1": "dispersed, volume: 2 L, peclet: 0.1, ends: open",
  "open, Péclet 30": "dispersed, volume: 2 L, peclet: 30, ends: open",
  "dispersed with pockets": "dispersed, volume: 2 L, peclet: 8, stagnant: {volume: 1 L, exchange: 0.7 L/min}",
  laminar: "laminar, volume: 2 L",
  "1.02 tanks": "cascade, volume: 2 L, tanks: 1.02",
  "1.5 tanks": "cascade, volume: 2 L, tanks: 1.5",
  "2.98 tanks": "cascade, volume: 2 L, tanks: 2.98",
  "7 tanks": "cascade, volume: 2 L, tanks: 7",
  "tanks with pockets": "cascade, volume: 2 L, tanks: 3.3, stagnant: {volume: 1 L, exchange: 0.7 L/min}",
  "tube with pockets": "tubular, volume: 2 L, stagnant: {volume: 1 L, exchange: 3 L/min}",
};

test.each(Object.entries(bodies))("%s: the equations in time have the transfer function of the formula", (_, keys) => {
  const plant = plantOf(vessel(`  a: {kind: ${keys}, to: out}`));
  const node = plant.nodes.find((n) => n.block);
  const block = node?.block;
  const flow = node?.inflow ?? 0;
  const r = block?.realize(flow);
  if (!block || !r) throw new Error("no equations");
  const tau = 0.002 / flow;
  for (const z of [0, 0.01, 0.3, 2, 10]) {
    for (const angle of [0, 0.7, 1.5]) {
      const s = { re: (z * Math.cos(angle)) / tau, im: (z * Math.sin(angle)) / tau };
      const difference = complex.size(complex.subtract(transferOf(r, s, flow), block.transfer(s, flow)));
      expect(difference, `z = ${z}, angle ${angle}`).toBeLessThan(2e-9);
    }
  }
});

test.each(Object.entries(bodies))("%s: tracer that enters leaves or is held", (_, keys) => {
  const plant = plantOf(vessel(`  a: {kind: ${keys}, to: out}`));
  const node = plant.nodes.find((n) => n.block);
  const flow = node?.inflow ?? 0;
  const r = node?.block?.realize(flow);
  if (!r) throw new Error("no equations");
  // g (Q A + S) = -Q c and g b = 1 - d
  const n = r.input.length;
  const lost = r.output.map((c) => flow * c);
  const scale = new Float64Array(n).fill(flow);
  for (let i = 0; i < n; i++) {
    for (const [part, factor] of [
      [r.through, flow],
      [r.still, 1],
    ] as const) {
      for (let k = part.start[i]; k < part.start[i + 1]; k++) {
        lost[part.column[k]] += r.held[i] * factor * part.value[k];
        scale[part.column[k]] += Math.abs(r.held[i] * factor * part.value[k]);
      }
    }
  }
  lost.forEach((x, i) => {
    expect(Math.abs(x)).toBeLessThan(1e-11 * scale[i]);
  });
  const kept = r.input.reduce((sum, b, i) => sum + b * r.held[i], r.direct);
  expect(Math.abs(kept - 1)).toBeLessThan(1e-10);
});
