import { describe, expect, test } from "vitest";
import { standFor } from "../../src/fit/censored.js";
import { fit } from "../../src/fit/fit.js";
import { refitsOf } from "../../src/fit/resample.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { normalCdf } from "../../src/numerics/distributions.js";
import { random } from "../../src/numerics/random.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";

// Working value and weight are slope and curvature of ln P by high-order differences.
test.each([-9, -3, -0.4, 0, 1.2, 4])(
  "a reading below its limit, which lies %d standard deviations over the model",
  (z) => {
    const [limit, sigma] = [0.3, 0.02];
    const fitted = limit - z * sigma;
    const { value, information } = standFor(-1, limit, fitted, sigma);
    const log = (f: number): number => Math.log(normalCdf((limit - f) / sigma));
    const h = 1e-3 * sigma;
    const slope = (log(fitted + h) - log(fitted - h)) / (2 * h);
    expect(((value - fitted) * information) / sigma ** 2 / slope).toBeCloseTo(1, 4);
    const bend = (log(fitted + 10 * h) - 2 * log(fitted) + log(fitted - 10 * h)) / (100 * h * h);
    expect(information / (-bend * sigma ** 2)).toBeCloseTo(1, 2);
    expect(standFor(1, -limit, -fitted, sigma)).toEqual({ value: -value, information });
  },
);

const network = parseNetwork(`network: Tank with a quiet corner
format: 1
parameters: {held: {value: 30 L, between: [2 L, 60 L]}, renewal: {value: 0.1 L/min, between: [0.01 L/min, 1 L/min], spacing: log}}
feeds: {feed: {flow: 1 L/min, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: 100 L - held, to: product, exchange: {quiet: renewal}}
  quiet: {kind: stirred, volume: held}
outlets: [product]
`).document as Network;

/** E of the same with 20 L held, 0.05 L/min: rates and amplitudes of the two exponentials, V = Q = 1, times of 100 min. */
const exact = (t: number): number =>
  1.23339 * Math.exp(-1.32701 * (t / 100)) + 0.0166143 * Math.exp(-0.235492 * (t / 100));

const times = Array.from({ length: 80 }, (_, i) => 2 + 10 * i);
function fitted(values: readonly number[], reading: string) {
  const csv = `t,c\n${times.map((t, i) => `${t},${values[i]}`).join("\n")}\n`;
  const text = `trial: T\nformat: 1\ninjection: {at: feed, pulse: 100 g}\nreadings: [{at: product, file: l.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}${reading}}]\n`;
  const { document } = parseTrial(text, { path: "t.yaml", read: () => csv });
  const { fit: found } = fit(network, [document as Trial], { starts: 0 });
  return Object.fromEntries((found?.parameters ?? []).map((p) => [p.name, p]));
}

describe("a fit to readings of which many are below the limit of detection", () => {
  const limit = 0.012;
  const sd = 0.004;
  const truth = 5e-5 / 60; // m3/s
  test("finds the truth where limits taken for values or left out do not, and its errors are true", () => {
    const noise = random(3);
    const found = { censored: [] as number[], believed: [] as number[], claimed: [] as number[] };
    for (let run = 0; run < 12; run++) {
      const values = times.map((t) => Math.max(limit, exact(t) + sd * noise.normal()));
      const censored = fitted(values, `, noise: {floor: ${sd} g/L}, limits: {below: ${limit} g/L}`);
      found.censored.push(Math.log((censored.renewal?.value ?? 0) / truth));
      found.claimed.push((censored.renewal?.standardError ?? 0) / (censored.renewal?.value ?? 1));
      const believed = fitted(values, `, noise: {floor: ${sd} g/L}`);
      found.believed.push(Math.log((believed.renewal?.value ?? 0) / truth));
    }
    const mean = (v: readonly number[]): number => v.reduce((a, b) => a + b, 0) / v.length;
    const scatter = Math.sqrt(mean(found.censored.map((v) => (v - mean(found.censored)) ** 2)) * (12 / 11));
    expect(Math.abs(mean(found.censored))).toBeLessThan((3 * scatter) / Math.sqrt(12));
    expect(Math.abs(mean(found.believed))).toBeGreaterThan(3 * Math.abs(mean(found.censored)));
    expect(mean(found.claimed) / scatter).toBeGreaterThan(0.5);
    expect(mean(found.claimed) / scatter).toBeLessThan(2);
  });

  test("refits are censored anew, and scatter by what the fit says", () => {
    const noise = random(8);
    const csv = `t,c\n${times.map((t) => `${t},${Math.max(limit, exact(t) + sd * noise.normal())}`).join("\n")}\n`;
    const text = `trial: T\nformat: 1\ninjection: {at: feed, pulse: 100 g}\nreadings: [{at: product, file: l.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}, noise: {floor: ${sd} g/L}, limits: {below: ${limit} g/L}}]\n`;
    const { document } = parseTrial(text, { path: "t.yaml", read: () => csv });
    const trial = document as Trial;
    const { fit: found } = fit(network, [trial], { starts: 0 });
    if (!found) throw new Error("no fit");
    const { renewal: at } = found.values;
    const refits = refitsOf(network, [trial], { values: found.values, seed: 4 });
    const logs = Array.from({ length: 60 }, (_, r) => Math.log((refits?.refit(r)?.[1] ?? Number.NaN) / at));
    const mean = logs.reduce((sum, v) => sum + v, 0) / logs.length;
    const scatter = Math.sqrt(logs.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (logs.length - 1));
    const claimed = (found.parameters[1].standardError ?? Number.NaN) / at;
    expect(Math.abs(mean)).toBeLessThan((4 * scatter) / Math.sqrt(logs.length) + 0.1 * scatter);
    expect(scatter / claimed).toBeGreaterThan(0.6);
    expect(scatter / claimed).toBeLessThan(1.6);
  });

  test("a detector in saturation: the peak is told by what is beside it", () => {
    const values = times.map((t) => Math.min(0.8, exact(t)));
    const one = fitted(values, ", noise: {floor: 0.002 g/L}, limits: {above: 0.8 g/L}");
    expect((one.held?.value ?? 0) / 0.02).toBeCloseTo(1, 1);
  });
});
