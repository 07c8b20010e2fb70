import { describe, expect, test } from "vitest";
import { type FitOptions, fit } from "../../src/fit/fit.js";
import type { Fit } from "../../src/fit/result.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { random } from "../../src/numerics/random.js";
import { textOf } from "./load.js";
import { flask, flaskTrial, left, steadyTrial, table, tank, trial } from "./reaction-documents.js";

function fitted(network: Network, trials: readonly Trial[], options: FitOptions = {}): Fit {
  const { fit: found, problems } = fit(network, trials, options);
  if (!found) throw new Error(problems.map((p) => `${p.code}: ${p.message}`).join("\n"));
  expect(found.converged).toBe(true);
  return found;
}

const parameter = (of: Fit, name: string) => {
  const found = of.parameters.find((p) => p.name === name);
  if (!found) throw new Error(name);
  return found;
};

const times = Array.from({ length: 12 }, (_, i) => 0.5 * i);

/** Two flasks, with noise where it is asked for: truth 2 L/mol/min at 25 degC, 50 kJ/mol. */
const flasks = (spread = 0, seed = 5): Trial[] => {
  const noise = random(seed);
  return [25, 45].map((celsius) =>
    flaskTrial(
      celsius,
      table(times, (t) => left(t, celsius + 273.15, 2, 50) + spread * noise.normal()),
    ),
  );
};

describe("kinetics from a flask", () => {
  test("data without noise give back what they were made with: a second-order law at two temperatures", () => {
    const found = fitted(flask(), flasks());
    expect(parameter(found, "k25").value / (2e-3 / 60)).toBeCloseTo(1, 8);
    expect(parameter(found, "E").value / 50e3).toBeCloseTo(1, 8);
  });

  test("with noise: the truth lies within the intervals, and the order of trials changes nothing", () => {
    const trials = flasks(0.01);
    const found = fitted(flask(), trials);
    for (const [name, truth] of [
      ["k25", 2e-3 / 60],
      ["E", 50e3],
    ] as const) {
      const [low, high] = parameter(found, name).interval95 ?? [Number.NaN, Number.NaN];
      expect(low).toBeLessThan(truth);
      expect(high).toBeGreaterThan(truth);
    }
    const turned = fitted(flask(), [trials[1], trials[0]]);
    for (const p of found.parameters) expect(parameter(turned, p.name).value / p.value).toBeCloseTo(1, 6);
  });

  test("standard errors are those of the closed form's own derivatives", () => {
    const found = fitted(flask(), flasks(0.01));
    const [k, e] = [parameter(found, "k25"), parameter(found, "E")];
    const [k25, activation] = [k.value / (1e-3 / 60), e.value / 1e3];
    const columns = [25, 45].flatMap((celsius) =>
      times.map((t) => {
        const at = (dk: number, de: number) => left(t, celsius + 273.15, k25 + dk, activation + de);
        return [(at(1e-4, 0) - at(-1e-4, 0)) / 2e-4, (at(0, 1e-3) - at(0, -1e-3)) / 2e-3];
      }),
    );
    const sum = (i: number, j: number) => columns.reduce((s, c) => s + c[i] * c[j], 0);
    const determinant = sum(0, 0) * sum(1, 1) - sum(0, 1) ** 2;
    const variance = found.residualSumOfSquares / (found.observations - 2);
    expect((k.standardError ?? 0) / (1e-3 / 60)).toBeCloseTo(Math.sqrt((variance * sum(1, 1)) / determinant), 5);
    expect((e.standardError ?? 0) / 1e3).toBeCloseTo(Math.sqrt((variance * sum(0, 0)) / determinant), 4);
  });

  test("where nothing can react, the fit says that it can tell nothing", () => {
    const lone = flaskTrial(
      25,
      table(times, (t) => 0.9 + 0.1 * Math.exp(-t)),
      "{A: 1 mol/L}",
    );
    const { fit: found } = fit(flask(), [lone]);
    expect(found?.findings.map((f) => f.code)).toContain("cannot-tell");
    expect(found?.parameters.every((p) => p.standardError === undefined)).toBe(true);
  });

  test("units change nothing: grams for moles, seconds for minutes", () => {
    const data = times.map((t) => [t, left(t, 298.15, 2, 50) + 0.01 * Math.sin(7 * t)]);
    const one = (unit: string, time: string, by: number, pace: number): Trial =>
      trial(
        `trial: Flask
format: 1
chemistry: second.yaml
vessel: flask.yaml
temperature: 25 degC
contents: {flask: {A: ${by} ${unit}, B: 1.2 mol/L}}
readings: [{at: flask, of: A, file: data.csv, time: {column: t, unit: ${time}}, value: {column: c, unit: ${unit}}}]
`,
        { "data.csv": `t,c\n${data.map(([t, c]) => `${t * pace},${c * by}`).join("\n")}\n` },
      );
    const [moles, grams] = [one("mol/L", "min", 1, 1), one("g/L", "s", 88, 60)].map((t) =>
      parameter(fitted(flask(), [t], { free: ["k25"] }), "k25"),
    );
    expect(grams.value / moles.value).toBeCloseTo(1, 7);
    expect((grams.standardError ?? 0) / (moles.standardError ?? 1)).toBeCloseTo(1, 6);
  });

  test("oxygen demand after days in a bottle: the certified values of NIST's BoxBOD", () => {
    // Box, Hunter & Hunter, Statistics for Experimenters, Wiley 1978, pp. 483-487: y = b1 (1 - exp(-b2 t)), t in days. What
    // could be used up (b1) is an open scale here, 1 g/L at the start.
    const { x, y, certified } = boxBod();
    const bottle = trial(
      `trial: Oxygen demand
format: 1
chemistry: first.yaml
vessel: flask.yaml
contents: {flask: {A: 1 g/L}}
readings: [{at: flask, of: P, scale: free, file: data.csv, time: {column: t, unit: d}, value: {column: c, unit: mg/L}}]
`,
      { "data.csv": table(x, (t) => y[x.indexOf(t)]), "first.yaml": perDay },
    );
    const found = fitted(flask(), [bottle]);
    const { value, standardError } = parameter(found, "k");
    const perSecond = 1 / 86_400;
    expect(value / perSecond / certified.parameters[1]).toBeCloseTo(1, 7);
    expect((standardError ?? 0) / perSecond / certified.standard_deviations[1]).toBeCloseTo(1, 5);
    const [{ scale }] = Object.values(found.nuisance);
    expect((scale?.value ?? 0) * 1000).toBeCloseTo(certified.parameters[0], 4);
    expect(found.residualSumOfSquares / certified.residual_sum_of_squares).toBeCloseTo(1, 8);
  });
});

const perDay = `chemistry: First order
format: 1
species: {A: {}, P: {}}
parameters: {k: {value: 1 1/d, between: [0.001 1/d, 50 1/d], spacing: log}}
reactions: [{makes: {A: -1, P: 1}, rate: k * A}]
`;

interface Certified {
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly certified: {
    readonly parameters: readonly number[];
    readonly standard_deviations: readonly number[];
    readonly residual_sum_of_squares: number;
  };
}

function boxBod(): Certified {
  const found = JSON.parse(textOf("shared/reference/nist-strd/BoxBOD.json"));
  return { x: found.data.x, y: found.data.y, certified: found.certified };
}

describe("kinetics from analyses of a plant", () => {
  const whole = tank("{bypass: {value: 0 %, between: [0 %, 60 %]}}");

  test("first order in a stirred tank, 100 L at 10 L/min: k = (1 / C - 1) / 10 min, its spread by that of the analyses", () => {
    // Of two analyses that weigh alike, 0.2 ± 0.01 and 0.21 ± 0.01, the mean counts.
    const analyses =
      "[{at: out, of: A, value: 0.2 mol/L ± 0.01 mol/L}, {at: out, of: A, value: 0.21 mol/L ± 0.01 mol/L}]";
    const { value, standardError } = parameter(fitted(whole, [steadyTrial(analyses)], { free: ["k"] }), "k");
    expect(value * 60).toBeCloseTo((1 / 0.205 - 1) / 10, 7);
    // Their scatter about it, 0.005 each, has one degree of freedom: 0.00707 of one, 0.005 of the mean; dk = dC / (10 min C^2).
    expect((standardError ?? 0) * 60).toBeCloseTo(0.005 / 10 / 0.205 ** 2, 6);
  });

  test("a feed with a ± widens the interval by what it moves k", () => {
    const analyses =
      "[{at: out, of: A, value: 0.21 mol/L ± 5 %}, {at: out, of: A, value: 0.19 mol/L ± 5 %}, {at: out, of: P, value: 0.8 mol/L ± 5 %}]";
    const width = (feed: string): number => {
      const [low, high] = parameter(fitted(whole, [steadyTrial(analyses, feed)], { free: ["k"] }), "k").interval95 ?? [
        0, 0,
      ];
      return high - low;
    };
    expect(width("{A: 1 mol/L ± 5 %}")).toBeGreaterThan(1.02 * width("{A: 1 mol/L}"));
  });

  test("bypass and rate together are what one analysis cannot tell; a tracer trial beside it can", () => {
    const analyses =
      "[{at: out, of: A, value: 0.28 mol/L ± 1 %}, {at: out, of: A, value: 0.281 mol/L ± 1 %}, {at: out, of: P, value: 0.72 mol/L ± 1 %}]";
    // 10 % past a tank of 100 L: C = 0.1 + 0.9 / (1 + 0.4 * 100 / 9) at k = 0.4 1/min is 0.2654.
    const alone = fitted(tank(), [steadyTrial(analyses)]);
    expect(alone.findings.map((f) => f.code)).toContain("cannot-tell");
    const salt = trial(
      `trial: Salt
format: 1
injection: {at: feed, step: 1 g/L}
readings: [{at: out, file: data.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]
`,
      {
        "data.csv": table(
          [1, 3, 6, 10, 15, 20, 30, 45],
          (t) => 1 - 0.9 * Math.exp((-0.9 * t) / 10) + 1e-3 * Math.sin(7 * t),
        ),
      },
    );
    const together = fitted(tank(), [steadyTrial(analyses), salt]);
    expect(together.findings.map((f) => f.code)).not.toContain("cannot-tell");
    expect(parameter(together, "bypass").value).toBeCloseTo(0.1, 2);
    const bypass = parameter(together, "bypass").value;
    const reached = (0.2804 - bypass) / (1 - bypass);
    expect(parameter(together, "k").value * 60).toBeCloseTo(((1 / reached - 1) * (1 - bypass)) / 10, 2);
    const [[, rho]] = together.correlation.rows;
    expect(Math.abs(rho)).toBeGreaterThan(0.05);
  });

  test("trials that share no parameter do not touch one another: a flask beside a tracer", () => {
    const salt = trial(
      `trial: Salt
format: 1
injection: {at: feed, step: 1 mol/L}
readings: [{at: out, noise: {floor: 0.01 mol/L}, file: data.csv, time: {column: t, unit: min}, value: {column: c, unit: mol/L}}]
`,
      {
        "data.csv": table(
          [1, 3, 6, 10, 15, 20, 30, 45],
          (t) => 1 - 0.9 * Math.exp((-0.9 * t) / 10) + 1e-2 * Math.sin(7 * t),
        ),
      },
    );
    const kinetic = flasks(0.01);
    const together = fitted(tank(), [salt, ...kinetic]);
    const apart = [fitted(tank(), [salt]), fitted(flask(), kinetic)];
    for (const p of apart.flatMap((a) => a.parameters))
      expect(parameter(together, p.name).value / p.value).toBeCloseTo(1, 5);
    const [[, rho]] = together.correlation.rows;
    expect(Math.abs(rho)).toBeLessThan(1e-6);
  });

  test("names that the vessel has too go by the name of the chemistry's file", () => {
    const own = tank("{k: {value: 10 %, between: [0 %, 60 %]}, bypass: {value: k}}");
    const found = fitted(
      own,
      [steadyTrial("[{at: out, of: A, value: 0.2654 mol/L ± 1 %}, {at: out, of: P, value: 0.734 mol/L ± 1 %}]")],
      { free: ["first.k"] },
    );
    expect(parameter(found, "first.k").value * 60).toBeCloseTo(0.4, 2);
  });
});

describe("kinetics from a vessel that goes on in time", () => {
  const whole = tank("{bypass: {value: 0 %, between: [0 %, 60 %]}}");
  const start = (data: string, contents: string): Trial =>
    trial(
      `trial: Start
format: 1
chemistry: first.yaml
feeds: {feed: {A: 1 mol/L ± 0.5 %}}
${contents}readings: [{at: out, of: A, file: data.csv, time: {column: t, unit: min}, value: {column: c, unit: mol/L}}]
`,
      { "data.csv": data },
    );
  // dC/dt = (1 - C) / 10 min - k C: towards 1 / (1 + 10 k) at the rate 0.1 + k per minute.
  const after = (t: number, k: number, from: number) => {
    const end = 1 / (1 + 10 * k);
    return end + (from - end) * Math.exp(-(0.1 + k) * t);
  };

  test.each([
    ["clean", "", 0],
    ["full", "contents: {tank: {A: 0.8 mol/L}}\n", 0.8],
  ])("a stirred tank that starts %s", (_, contents, from) => {
    const data = table([0.5, 1, 2, 3, 5, 8, 12, 20], (t) => after(t, 0.4, from) + 1e-4 * Math.sin(11 * t));
    const found = fitted(whole, [start(data, contents)], { free: ["k"] });
    const { value, interval95 } = parameter(found, "k");
    expect(value * 60).toBeCloseTo(0.4, 2);
    expect((interval95?.[0] ?? 1) * 60).toBeLessThan(0.4);
    expect((interval95?.[1] ?? 0) * 60).toBeGreaterThan(0.4);
  });

  test("readings in time and analyses of the end beside one another", () => {
    const data = table([0.5, 1, 2, 3, 5, 8, 12, 20], (t) => after(t, 0.4, 0) + 1e-3 * Math.sin(11 * t));
    const analyses = "[{at: out, of: A, value: 0.2005 mol/L ± 0.001 mol/L}]";
    const found = fitted(whole, [start(data, ""), steadyTrial(analyses)], { free: ["k"] });
    expect(found.observations).toBe(9);
    expect(parameter(found, "k").value * 60).toBeCloseTo(0.4, 2);
  });

  test("a loop of tube on a flask: what is in the tube reacts too", () => {
    const loop = `network: Flask with a loop
format: 1
compartments:
  flask: {kind: stirred, volume: 1 L, to: {pipe: 0.5 L/min}}
  pipe: {kind: tubular, volume: 0.2 L, to: {flask: 0.5 L/min}}
`;
    // All of it holds the same and reacts alike: first order everywhere is exp(-k t), tube or not.
    const looped = trial(
      `trial: Loop
format: 1
chemistry: first.yaml
vessel: loop.yaml
contents: {all: {A: 1 mol/L}}
readings: [{at: flask, of: A, file: data.csv, time: {column: t, unit: min}, value: {column: c, unit: mol/L}}]
`,
      {
        "loop.yaml": loop,
        "data.csv": table([0.5, 1, 2, 3], (t) => Math.exp(-0.3 * t) + 1e-4 * Math.sin(11 * t)),
      },
    );
    expect(parameter(fitted(flask(), [looped], { starts: 0 }), "k").value * 60).toBeCloseTo(0.3, 3);
  });
});

describe("a flask and a plant", () => {
  const noise = random(11);
  const run = trial(
    `trial: Flask run
format: 1
chemistry: first.yaml
vessel: flask.yaml
contents: {flask: {A: 1 mol/L}}
readings: [{at: flask, of: A, file: data.csv, time: {column: t, unit: min}, value: {column: c, unit: mol/L}, noise: {floor: 0.01 mol/L}}]
`,
    { "data.csv": table([0.5, 1, 2, 3, 5, 8, 12, 20], (t) => Math.exp(-0.2 * t) + 0.01 * noise.normal()) },
  );
  const codes = (plant: string): string[] =>
    fitted(
      tank("{bypass: {value: 0 %, between: [0 %, 60 %]}}"),
      [run, steadyTrial(`[{at: out, of: A, value: ${plant} mol/L ± 0.005 mol/L}]`)],
      { free: ["k"] },
    ).findings.map((f) => f.code);

  // By the flask's 0.2 1/min, 100 L at 10 L/min leave 1 / (1 + 2) of A.
  test("that agree within their errors are told nothing of; that do not are told to contradict one another", () => {
    expect(codes("0.335")).not.toContain("trial-contradicted");
    expect(codes("0.45")).toContain("trial-contradicted");
  });
});
