import { describe, expect, test } from "vitest";
import { fit, fitWith } from "../../src/fit/fit.js";
import type { ForwardModel } from "../../src/fit/forward.js";
import { networkModel } from "../../src/fit/network-model.js";
import { networkOf } from "./load.js";
import { every, fitted, noisy, synthetic } from "./synthetic.js";

const pulse = "{at: feed, pulse: 50 g}";

/** A tank with a corner: how large the corner is and how fast it is renewed. */
const corner = networkOf(`network: Tank and corner
format: 1
parameters:
  bypass: {value: 5 %, between: [0 %, 30 %]}
  corner: {value: 20 L, between: [1 L, 60 L]}
  renewal: {value: 1 L/min, between: [0.02 L/min, 40 L/min], spacing: log}
feeds: {feed: {flow: 10 L/min, to: {bulk: rest, out: bypass}}}
compartments:
  bulk: {kind: stirred, volume: 100 L - corner, to: out, exchange: {quiet: renewal}}
  quiet: {kind: stirred, volume: corner}
outlets: [out]
`);
const inCorner = (truth: Record<string, number>, noise: number, times = every(1.5, 40), seed = 3) =>
  synthetic(corner, truth, { injection: pulse, at: "bulk", times, noise: noisy(seed, noise) });

describe("what only a fit can find", () => {
  test("too-few-points", () => {
    const trial = synthetic(
      corner,
      { bypass: 0, corner: 0.02, renewal: 2e-5 },
      { injection: pulse, at: "out", times: every(10, 3) },
    );
    const { problems } = fit(corner, [trial]);
    expect(problems.map((p) => p.code)).toEqual(["too-few-points"]);
    expect(problems.map((p) => p.message)).toEqual([
      "3 points cannot fix 3 unknowns (parameters, baselines and scales)",
    ]);
  });

  test("no-signal-to-fit: zeros or a constant; one curve among them is enough", () => {
    const truth = { bypass: 0, corner: 0.02, renewal: 2e-5 };
    const blank = (value: () => number, reading: string[]) =>
      synthetic(corner, truth, {
        injection: pulse,
        at: "bulk",
        times: every(1.5, 40),
        reading,
        noise: (_, c) => value() - c,
      });
    const blanks = [blank(() => 0, []), blank(() => 0.3, ["scale: free", "baseline: constant"])];
    for (const trial of blanks) {
      const { fit: found, problems } = fit(corner, [trial]);
      expect(problems.map((p) => p.code)).toEqual(["no-signal-to-fit"]);
      expect(found).toBeUndefined();
    }
    expect(fit(corner, [blanks[0]]).problems[0].message).toBe("'Synthetic/bulk' never changes: every point is 0 g/L");
    expect(fit(corner, blanks).problems[0].message).toContain("and the other reading does not change either");
    expect(fit(corner, [blanks[0], inCorner(truth, 0.001)], { starts: 0 }).fit).toBeDefined();
  });

  test("spreads-differ: a coarse and a fine instrument without `noise:`", () => {
    const truth = { bypass: 0.05, corner: 0.02, renewal: 2e-5 };
    const [fine, coarse] = [inCorner(truth, 0.0002), inCorner(truth, 0.01)];
    const codes = (trials: (typeof fine)[]) =>
      fitted(corner, trials, { free: ["corner", "renewal"], starts: 0 }).findings.map((f) => f.code);
    expect(codes([fine, coarse])).toContain("spreads-differ");
    expect(codes([fine, inCorner(truth, 0.001)])).not.toContain("spreads-differ");
    const noiseOf = (trial: typeof fine, sd: number) => ({
      ...trial,
      readings: trial.readings.map((r) => ({ ...r, noise: { floor: undefined, relative: sd } })),
    });
    expect(codes([noiseOf(fine, 0.001), noiseOf(coarse, 0.05)])).not.toContain("spreads-differ");
  });

  test("no-start: a pump that takes more than the day's feed", () => {
    const network = networkOf(`network: A pumped loop
format: 1
parameters: {tank: {value: 50 L, between: [5 L, 100 L]}}
feeds: {feed: {flow: 10 L/min, to: a}}
compartments: {a: {kind: stirred, volume: tank, to: {side: 4 L/min, out: rest}}}
outlets: [out, side]
`);
    const trial = synthetic(network, { tank: 0.04 }, { injection: pulse, at: "out", times: every(1, 20) });
    const { flow } = network.feeds[0];
    const starved = { ...trial, flows: new Map([["feed", { ...flow, of: () => 3 / 6e4 }]]) };
    expect(fit(network, [starved]).problems.map((p) => p.code)).toEqual(["no-start"]);
  });

  test("strongly-correlated: what a small tank adds in front of a large one is nearly what a tube adds", () => {
    const network = networkOf(`network: Tube, tank, tank
format: 1
parameters:
  leg: {value: 3 L, between: [0 L, 20 L]}
  mixer: {value: 3 L, between: [0.1 L, 20 L]}
feeds: {feed: {flow: 10 L/min, to: tube}}
compartments:
  tube: {kind: tubular, volume: leg, to: small}
  small: {kind: stirred, volume: mixer, to: bulk}
  bulk: {kind: stirred, volume: 100 L, to: out}
outlets: [out]
`);
    const trial = synthetic(
      network,
      { leg: 0.004, mixer: 0.003 },
      { injection: "{at: feed, pulse: 50 g, lasting: 1 min}", at: "out", times: every(2, 30), noise: noisy(3, 0.0003) },
    );
    const finding = fitted(network, [trial]).findings.find((f) => f.code === "strongly-correlated");
    expect(finding?.about).toEqual(["leg", "mixer"]);
  });

  test("wide-interval: noise as large as what the corner does", () => {
    const found = fitted(corner, [inCorner({ bypass: 0.02, corner: 0.02, renewal: 2e-5 }, 0.05)]);
    const codes = found.findings.map((f) => f.code);
    expect(codes).toContain("wide-interval");
  });

  test("interval-cut: a bypass so small that none is possible", () => {
    const trial = synthetic(
      corner,
      { bypass: 0.004, corner: 0.02, renewal: 2e-5 },
      { injection: "{at: feed, pulse: 50 g, lasting: 3 min}", at: "out", times: every(0.5, 60), noise: noisy(8, 0.02) },
    );
    const { findings } = fitted(corner, [trial], { free: ["bypass"] });
    expect(findings.map((f) => f.code)).toContain("interval-cut");
    expect(findings.find((f) => f.code === "interval-cut")?.message).toContain("bypass is cut at its lower bound");
  });

  test("fit-not-converged: a model that jumps about more than it changes", () => {
    const exact = networkModel(corner);
    const rough: ForwardModel = {
      ...exact,
      respond: (trial, values, wanted) => {
        const jump = 1 + 0.02 * Math.sin(1e7 * (values.corner ?? 0)) * Math.cos(3e12 * (values.renewal ?? 0));
        return exact.respond(trial, values, wanted)?.map((curve) => curve.map((c) => c * jump));
      },
    };
    const trial = inCorner({ bypass: 0, corner: 0.02, renewal: 2e-5 }, 0.0005);
    const { fit: found } = fitWith(rough, corner, [trial], { free: ["corner", "renewal"], starts: 2 });
    expect(found?.converged).toBe(false);
    expect(found?.findings[0].code).toBe("fit-not-converged");
  });

  test("several-optima: two tanks in a row, either may be the large one", () => {
    const network = networkOf(`network: Two tanks
format: 1
parameters:
  first: {value: 15 L, between: [1 L, 90 L]}
  second: {value: 70 L, between: [1 L, 90 L]}
feeds: {feed: {flow: 10 L/min, to: a}}
compartments: {a: {kind: stirred, volume: first, to: b}, b: {kind: stirred, volume: second, to: out}}
outlets: [out]
`);
    const trial = synthetic(
      network,
      { first: 0.02, second: 0.06 },
      { injection: pulse, at: "out", times: every(1, 40), noise: noisy(5, 0.003) },
    );
    const found = fitted(network, [trial]);
    expect(found.findings.map((f) => f.code)).toContain("several-optima");
  });
});
