import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { bootstrapOf } from "../../src/fit/bootstrap.js";
import { fit } from "../../src/fit/fit.js";
import { type RefitOptions, type Refits, refitsOf } from "../../src/fit/resample.js";
import type { Fit } from "../../src/fit/result.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { random } from "../../src/numerics/random.js";
import { noises, vessels } from "../bench/coverage/cases.js";
import { networkAt, networkOf, trialAt } from "./load.js";
import { every, fitted, noisy, synthetic } from "./synthetic.js";

const tank = networkOf(`network: n
format: 1
parameters: {size: {value: 60 L, between: [10 L, 300 L]}, tube: {value: 10 L, between: [1 L, 50 L]}}
feeds:
  feed: {flow: 10 L/min, to: a}
compartments:
  a: {kind: stirred, repeat: 3, volume: size + tube, to: out}
outlets: [out]
`);
const pulse = { injection: "{at: feed, pulse: 50 g, start: 0 min, lasting: 1 min}", at: "out", times: every(0.5, 60) };

function refits(network: Network, trial: Trial, found: Fit, options: Partial<RefitOptions> = {}): Refits {
  const made = refitsOf(network, [trial], { values: found.values, seed: 1, ...options });
  if (!made) throw new Error("no fit to refit");
  return made;
}

const rows = (of: Refits, n: number) => Array.from({ length: n }, (_, r) => of.refit(r));

describe("refits to data made anew", () => {
  const draw = noisy(5, 4e-3);
  const trial = synthetic(tank, { size: 0.05, tube: 0.01 }, { ...pulse, noise: () => draw() });
  const options = { free: ["size"] };
  const found = fitted(tank, [trial], options);

  // Four standard errors of what so many refits scatter themselves.
  test.each(["residual", "parametric"] as const)("scatter as linear theory has it where it holds: %s", (resampling) => {
    const how = refits(tank, trial, found, { ...options, resampling });
    const { parameters, failed } = bootstrapOf(found, 150, how, rows(how, 150));
    const [p] = found.parameters;
    expect(failed).toBe(0);
    expect(Math.abs(parameters[0].standardError / (p.standardError ?? Number.NaN) - 1)).toBeLessThan(
      4 / Math.sqrt(2 * 150),
    );
    expect(Math.abs(parameters[0].median - p.value)).toBeLessThan(
      ((4 * 1.25) / Math.sqrt(150)) * (p.standardError ?? 0),
    );
  });

  test("depend on their number and the seed alone", () => {
    const [a, b] = [refits(tank, trial, found, options), refits(tank, trial, found, options)];
    expect(a.resampling).toBe("residual");
    const forward = [0, 1, 2, 3].map((r) => a.refit(r));
    expect([3, 2, 1, 0].map((r) => b.refit(r)).reverse()).toEqual(forward);
    expect(refits(tank, trial, found, { ...options, seed: 2 }).refit(0)).not.toEqual(forward[0]);
  });

  test("a declared dose is drawn anew with them", () => {
    const loose = { ...pulse, injection: "{at: feed, pulse: 50 g ± 5 g, start: 0 min, lasting: 1 min}" };
    const noise = noisy(5, 4e-3);
    const other = synthetic(tank, { size: 0.05, tube: 0.01 }, { ...loose, noise: () => noise() });
    const wide = fitted(tank, [other], options);
    const how = refits(tank, other, wide, options);
    const [drawn] = bootstrapOf(wide, 100, how, rows(how, 100)).parameters;
    const [low, high] = wide.parameters[0].interval95 ?? [0, 0];
    expect((drawn.interval95[1] - drawn.interval95[0]) / (high - low)).toBeGreaterThan(0.75);
    expect((drawn.interval95[1] - drawn.interval95[0]) / (high - low)).toBeLessThan(1.3);
  });

  test("neighbours that hang together do so in what is drawn, and scatter as linear theory has it for them", () => {
    const draw = random(11);
    let last = 0;
    const hanging = synthetic(
      tank,
      { size: 0.05, tube: 0.01 },
      {
        ...pulse,
        times: every(0.25, 160),
        noise: () => {
          last = 0.8 * last + 0.6 * 4e-3 * draw.normal();
          return last;
        },
      },
    );
    const known = fitted(tank, [hanging], options);
    const how = refits(tank, hanging, known, options);
    expect(how.resampling).toBe("residual");
    const p = known.parameters[0];
    expect(p.standardErrorCorrelated).toBeGreaterThan(1.4 * (p.standardError ?? NaN));
    for (const resampling of ["residual", "parametric"] as const) {
      const of = refits(tank, hanging, known, { ...options, resampling });
      const { standardError } = bootstrapOf(known, 80, of, rows(of, 80)).parameters[0];
      // The spread of 80 refits is known to 8 %.
      expect(Math.abs(standardError / (p.standardErrorCorrelated ?? NaN) - 1)).toBeLessThan(0.25);
    }
    const blocks = refits(tank, hanging, known, { ...options, resampling: "block" });
    expect(blocks.block).toBeGreaterThan(5);
    const scatter = bootstrapOf(known, 80, blocks, rows(blocks, 80)).parameters[0].standardError;
    expect(scatter).toBeGreaterThan(1.4 * (p.standardError ?? NaN));
  });
});

// Standard deviations of 500 residual-bootstrap refits of the same case from its optimum by an independent closed-form fit
// (95 % of the tube volumes within 144.9 to 154.2 L, where a front crosses a sample); linear theory says twice as much.
test("a tube's volume scatters between the samples that its front lies between", () => {
  const network = networkAt("test/fit/p1/p1.yaml");
  const trial = trialAt("test/fit/p1/p1-pulse.yaml");
  const { fit: found } = fit(network, [trial]);
  const how = refits(network, trial, found as Fit);
  const { parameters } = bootstrapOf(found as Fit, 120, how, rows(how, 120));
  const [bypass, riser, stagnant, renewal] = parameters;
  expect(Math.abs(bypass.standardError / 2.7e-4 - 1)).toBeLessThan(0.2);
  expect(Math.abs(riser.standardError / 3.63e-3 - 1)).toBeLessThan(0.2);
  expect(Math.abs(stagnant.standardError / 6.69e-3 - 1)).toBeLessThan(0.2);
  expect(Math.abs((renewal.standardError * 6e4) / 0.0967 - 1)).toBeLessThan(0.2);
  expect(Math.abs(riser.interval95[0] - 0.1449)).toBeLessThan(5e-4);
  expect(Math.abs(riser.interval95[1] - 0.1542)).toBeLessThan(5e-4);
});

// The reading at the far end of the gap came out low by two standard deviations: the fit has its front just there, and one refit in
// forty has it anywhere in the gap, which tells the true volume, 150 L, no better than the gap's two ends do.
test("a refit whose front lies between two readings stands for all of the gap", () => {
  const vessel = vessels((path) => readFileSync(path, "utf8"))[1];
  const trial = vessel.trial(1031, noises[0]);
  const { fit: found } = fit(vessel.network, [trial], { starts: vessel.starts });
  expect(found?.values.riser).toBeGreaterThan(0.1542);
  const how = refits(vessel.network, trial, found as Fit);
  const all = rows(how, 150);
  const of = (between: readonly number[]) => bootstrapOf(found as Fit, 150, { ...how, between }, all).parameters[1];
  expect(how.between).toEqual([1]);
  expect(of(how.between).interval95[0]).toBeLessThan(0.1455);
  expect(of([]).interval95[0]).toBeGreaterThan(of(how.between).interval95[0] + 1e-3);
  expect(of(how.between).standardError).toBe(of([]).standardError);
});
