import { describe, expect, test } from "vitest";
import { projectorFor } from "../../src/fit/nuisance.js";
import { blocksOf } from "../../src/fit/observations.js";
import { factorQr, solveLeastSquares } from "../../src/numerics/qr.js";
import { random } from "../../src/numerics/random.js";
import { trialOf } from "./load.js";

const draw = random(3);
const n = 25;
const rows = Array.from({ length: n }, (_, i) => [600 + 2 * i, 0.5 + 0.01 * i + 0.05 * draw.normal()]);
const trial = trialOf(
  `trial: Late on the clock
format: 1
injection: {at: feed, pulse: 1 g, start: 595 s}
readings: [{at: out, file: d.csv, time: {column: t, unit: s}, value: {column: c, unit: g/L}, baseline: drift, scale: free}]
`,
  () => `t,c\n${rows.map((r) => r.join(",")).join("\n")}\n`,
);

describe("variable projection", () => {
  const [block] = blocksOf([trial]);
  const weight = Float64Array.from({ length: n }, () => 0.5 + draw.uniform());
  const model = Float64Array.from({ length: n }, (_, i) => Math.exp(-i / 5));
  const projector = projectorFor(block, weight);
  const residual = new Float64Array(n);
  const terms = projector.project(model, residual);

  test("gives the terms of the whole linear least-squares problem", () => {
    const a = Array.from({ length: n }, (_, i) =>
      [model[i], 1, block.time[i] - block.origin].map((x) => x * weight[i]),
    ).flat();
    const direct = solveLeastSquares(
      factorQr(a, n, 3),
      Array.from(block.measured, (y, i) => y * weight[i]),
    );
    expect(projector.terms).toBe(3);
    expect(terms.scale).toBeCloseTo(direct[0], 11);
    expect(terms.offset).toBeCloseTo(direct[1], 11);
    expect(terms.drift).toBeCloseTo(direct[2], 12);
  });

  test("leaves a residual that no column can reduce, and that is what the terms leave", () => {
    for (const c of projector.columns(model)) {
      const size = Math.sqrt(c.reduce((s, x) => s + x * x, 0));
      expect(Math.abs(c.reduce((s, x, i) => s + x * residual[i], 0)) / size).toBeLessThan(1e-13);
    }
    for (let i = 0; i < n; i++) {
      const fitted = terms.scale * model[i] + terms.offset + terms.drift * (block.time[i] - block.origin);
      expect(residual[i]).toBeCloseTo(weight[i] * (block.measured[i] - fitted), 12);
    }
  });

  test("baseline terms count from the injection", () => {
    expect(block.origin).toBe(595);
  });
});
