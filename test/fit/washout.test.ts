import { describe, expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import type { Fit } from "../../src/fit/result.js";
import { networkAt, textOf, trialAt } from "./load.js";

// Published data: Kwan, Breault, Umbenhauer, McMahon & Duggan, J. Pharmacokin. Biopharm. 4 (1976) 255-280, six subjects.
// Reference fits: R 4.2.2 nls with SSbiexp, refined in 40-digit arithmetic (see shared/reference/washout/indometh.json).
interface Published {
  fits: {
    subject: string;
    parameters: Record<(typeof names)[number], string>;
    standard_errors: Record<(typeof names)[number], string>;
    rss: string;
    df: number;
  }[];
}
const names = ["A1", "lrc1", "A2", "lrc2"] as const;
const published = JSON.parse(textOf("shared/reference/washout/indometh.json")) as Published;
const dose = 25; // mg

/** Two exchanging zones as a sum of two exponentials of the first one's concentration. L, L, L/h, L/h -> mg/L, ln(1/h), mg/L, ln(1/h). */
function biexponential([plasma, tissue, clearance, exchange]: readonly number[]): number[] {
  const out = clearance / plasma + exchange / plasma;
  const back = exchange / tissue;
  const sum = out + back;
  const root = Math.sqrt(sum * sum - (4 * clearance * back) / plasma);
  const [fast, slow] = [(sum + root) / 2, (sum - root) / 2];
  const start = dose / plasma;
  const a1 = (start * (fast - back)) / (fast - slow);
  return [a1, Math.log(fast), start - a1, Math.log(slow)];
}

const order = ["plasma", "tissue", "clearance", "exchange"];
const units = [1e-3, 1e-3, 1e-3 / 3600, 1e-3 / 3600];

/** Standard errors of the exponential form from those of the network, to first order. */
function errorsOf(fitted: Fit, at: readonly number[]): number[] {
  const g = at.map((v, j) => {
    const h = 1e-5 * v;
    const moved = (by: number): number[] => biexponential(at.map((x, k) => (k === j ? x + by : x)));
    const [above, below] = [moved(h), moved(-h)];
    return above.map((x, i) => (x - below[i]) / (2 * h));
  });
  const se = fitted.parameters.map((p, j) => (p.standardError ?? NaN) / units[j]);
  return names.map((_, i) => {
    let variance = 0;
    for (let j = 0; j < 4; j++) {
      for (let k = 0; k < 4; k++) variance += g[j][i] * g[k][i] * se[j] * se[k] * fitted.correlation.rows[j][k];
    }
    return Math.sqrt(variance);
  });
}

describe.each(published.fits.filter((f) => f.subject !== "all-pooled"))("subject $subject", (reference) => {
  const { fit: found } = fit(networkAt("networks/washout/two-zones.yaml"), [
    trialAt(`networks/washout/subject-${reference.subject}.yaml`),
  ]);
  if (!found) throw new Error("no fit");
  const at = found.parameters.map((p, j) => p.value / units[j]);

  test("two exchanging zones are the published two exponentials", () => {
    expect(found.parameters.map((p) => p.name)).toEqual(order);
    expect(found.converged).toBe(true);
    expect(found.residualUnit?.name).toBe("mg/L");
    expect(Math.abs(found.residualSumOfSquares / Number(reference.rss) - 1)).toBeLessThan(1e-9);
    const curve = biexponential(at);
    const errors = errorsOf(found, at);
    for (const [i, name] of names.entries()) {
      const error = Number(reference.standard_errors[name]);
      expect(Math.abs(curve[i] - Number(reference.parameters[name])) / error, name).toBeLessThan(1e-5);
      expect(Math.abs(errors[i] / error - 1), `standard error of ${name}`).toBeLessThan(1e-5);
    }
  });

  test("degrees of freedom and criteria", () => {
    expect(found.freedom).toBe(reference.df);
    const k = 5;
    const n = 11;
    const aicc = n * Math.log(Number(reference.rss) / n) + 2 * k + (2 * k * (k + 1)) / (n - k - 1);
    expect(found.aicc).toBeCloseTo(aicc, 6);
  });
});
