import { expect, test } from "vitest";
import { networkOf, trialOf } from "./load.js";
import { fitted, noisy, parameterOf } from "./synthetic.js";

const tank = networkOf(`network: One tank
format: 1
parameters: {V: {value: 60 L, between: [10 L, 300 L]}}
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: V, to: out}}
outlets: [out]
`);

/** 50 g into 100 L at 10 L/min, read each minute by a conductivity probe of 1.9 mS/cm for 1 g/L. */
function log(seed: number, calibration: string) {
  const noise = noisy(seed, 0.004);
  const rows = Array.from({ length: 81 }, (_, i) => `${i},${0.21 + 1.9 * (0.5 * Math.exp(-i / 10) + noise())}\n`);
  return trialOf(
    `trial: Salt
format: 1
injection: {at: feed, pulse: 50 g}
readings:
  - at: out
    file: log.csv
    time: {column: t, unit: min}
    value: {column: k, unit: mS/cm}
    calibration: {${calibration}, per: 1 g/L}
`,
    () => `t,k\n${rows.join("")}`,
  );
}

const interval = (calibration: string, seed = 1) => {
  const found = fitted(tank, [log(seed, calibration)], { starts: 0 });
  return { found, p: parameterOf(found, "V") };
};

test("the ± of a rise is carried: with a known scale 3 % of it are 3 % of a tank's volume, by linear theory", () => {
  for (const seed of [1, 2, 3]) {
    const { found, p } = interval("blank: 0.21 mS/cm, rise: 1.9 mS/cm ± 3 %", seed);
    const [low, high] = p.interval95 ?? [0, 0];
    // Of c = M/V exp(-tQ/V): d ln V / d ln c = -1 in least squares over the whole curve; 1.99 t-quantile, in squares with the noise.
    const noise = 1.99 * (p.standardError ?? 0);
    expect((high - low) / 2 / Math.hypot(1.99 * 0.03 * p.value, noise)).toBeCloseTo(1, 1);
    // What a calibration leaves open is no reason to call readings correlated.
    expect(found.findings.map((f) => f.code)).not.toContain("residuals-correlated");
  }
});

test("the ± of a blank is carried, too: an interval is never narrower for it", () => {
  const width = (calibration: string) => {
    const [low, high] = interval(calibration).p.interval95 ?? [0, 0];
    return high - low;
  };
  const plain = width("blank: 0.21 mS/cm, rise: 1.9 mS/cm");
  expect(width("blank: 0.21 mS/cm ± 0.1 mS/cm, rise: 1.9 mS/cm")).toBeGreaterThan(1.05 * plain);
});
