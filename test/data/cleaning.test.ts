import { describe, expect, test } from "vitest";
import { readMoments } from "../../src/data/moments.js";
import { fit } from "../../src/fit/fit.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { random as seeded } from "../../src/numerics/random.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { tanks } from "./helpers.js";

/** A trial around a log; more files by name. */
function trialOf(
  log: string,
  reading: string,
  { top = "", value = "{column: c, unit: g/L}", files = {} as Record<string, string> } = {},
): Trial {
  const text = `trial: Made for a test
format: 1
flows: {feed: 10 L/min}
injection: {at: feed, pulse: 100 g}
${top}
readings:
  - at: product
    file: log.csv
    time: {column: t, unit: min}
    value: ${value}
${reading
  .split("\n")
  .map((line) => `    ${line}`)
  .join("\n")}
`;
  const { document, problems } = parseTrial(text, {
    path: "trial.yaml",
    read: (p) => (p === "log.csv" ? log : files[p]),
  });
  if (!document) throw new Error(problems.map((p) => `${p.code}: ${p.message}`).join("\n"));
  return document;
}

const first = (trial: Trial) => {
  const result = readMoments(trial);
  return { ...result.readings[0], codes: result.findings.map((f) => f.code), grade: result.grade };
};
const value = (f: { value: number | undefined }): number => f.value as number;
const error = (f: { value: number | undefined; standardError?: number }): number => f.standardError as number;

/** 100 g in 10 L/min through 3 tanks of 20 min: g/L at t min. */
const three = (t: number): number => 10 * tanks(3, 20)(t);
const times = Array.from({ length: 241 }, (_, i) => i * 0.75);
const csv = (row: (t: number) => number | string, header = "t,c"): string =>
  `${header}\n${times.map((t) => `${t},${row(t)}`).join("\n")}\n`;
const plain = first(trialOf(csv(three), ""));

const standards = (scatter: readonly number[]): string =>
  `mV,C\n${scatter.map((e, i) => `${5 + 40 * i + e},${0.1 * i}`).join("\n")}\n`;
const points = "calibration: {points: {file: s.csv, reading: {column: mV, unit: mV}, value: {column: C, unit: g/L}}}";
const detector = { value: "{column: c, unit: mV}" };

describe("a calibration curve", () => {
  test("through exact standards gives the concentrations back, and says nothing of an error", () => {
    const exactly = trialOf(
      csv((t) => 5 + 400 * three(t)),
      points,
      { ...detector, files: { "s.csv": standards([0, 0, 0, 0, 0]) } },
    );
    const r = first(exactly);
    expect(value(r.area)).toBeCloseTo(value(plain.area), 9);
    expect(exactly.readings[0].doubts).toEqual([]);
    expect(r.steps.map((s) => s.name)).toEqual(["raw", "calibration", "front and tail"]);
  });

  test("bent standards give a parabola, and its inverse gives the concentrations back", () => {
    const bent = (c: number): number => 5 + 400 * c - 120 * c * c;
    const table = `mV,C\n${[0, 0.1, 0.2, 0.3, 0.4, 0.6].map((c) => `${bent(c)},${c}`).join("\n")}\n`;
    const r = first(
      trialOf(
        csv((t) => bent(three(t))),
        points,
        { ...detector, files: { "s.csv": table } },
      ),
    );
    expect(value(r.area)).toBeCloseTo(value(plain.area), 9);
  });

  test("what the scatter of standards leaves open of the area is what many sets of standards show", () => {
    const noise = seeded(7);
    const draw = () => {
      const table = standards(Array.from({ length: 6 }, () => 4 * noise.normal()));
      return first(
        trialOf(
          csv((t) => 5 + 400 * three(t)),
          points,
          { ...detector, files: { "s.csv": table } },
        ),
      );
    };
    const runs = Array.from({ length: 120 }, draw);
    const areas = runs.map((r) => value(r.area));
    const mean = areas.reduce((a, b) => a + b, 0) / areas.length;
    const sd = Math.sqrt(areas.reduce((s, a) => s + (a - mean) ** 2, 0) / (areas.length - 1));
    const claimed = Math.sqrt(runs.reduce((s, r) => s + error(r.area) ** 2, 0) / runs.length);
    expect(claimed / sd).toBeGreaterThan(0.8);
    expect(claimed / sd).toBeLessThan(1.25);
  });

  test("widens the interval of a fit as far as it moves the optimum", () => {
    const network = parseNetwork(`network: Tanks
format: 1
parameters: {held: {value: 190 L, between: [50 L, 400 L]}, clean: {value: 1 L/min, between: [0 L/min, 8 L/min]}}
feeds: {feed: {flow: 10 L/min, to: row}, water: {flow: clean, to: product}}
compartments:
  row: {kind: stirred, volume: held, repeat: 3, to: product}
outlets: [product]
`).document as Network;
    const noise = seeded(11);
    const found = Array.from({ length: 25 }, () => {
      const table = standards(Array.from({ length: 6 }, () => 2 * noise.normal()));
      const trial = trialOf(
        csv((t) => 5 + 400 * (0.9 * three(t) + 0.0001 * noise.normal())),
        `${points}\nnoise: {floor: 0.0001 g/L}`,
        { ...detector, files: { "s.csv": table } },
      );
      const p = fit(network, [trial], { starts: 0 }).fit?.parameters.find((q) => q.name === "clean");
      expect(p?.standardError).toBeDefined();
      const [low, high] = p?.interval95 ?? [0, 0];
      return { value: p?.value ?? 0, half: (high - low) / 2 };
    });
    const mean = found.reduce((s, f) => s + f.value, 0) / found.length;
    const sd = Math.sqrt(found.reduce((s, f) => s + (f.value - mean) ** 2, 0) / (found.length - 1));
    const claimed = found.reduce((s, f) => s + f.half, 0) / found.length / 1.97;
    expect(claimed / sd).toBeGreaterThan(0.65);
    expect(claimed / sd).toBeLessThan(1.5);
  });
});

test("conductivity is brought to one temperature before the calibration", () => {
  const warm = (t: number): number => 15 + 0.1 * t;
  const log = csv((t) => `${(5 + 400 * three(t)) * (1 + 0.02 * (warm(t) - 25))},${warm(t)}`, "t,c,T");
  const r = first(
    trialOf(
      log,
      "calibration: {blank: 5 mV, rise: 400 mV, per: 1 g/L, temperature: {column: T, unit: degC, to: 25 degC, by: 2 %/K}}",
      detector,
    ),
  );
  expect(r.steps.map((s) => s.name)).toEqual(["raw", "temperature", "calibration", "front and tail"]);
  expect(value(r.area)).toBeCloseTo(value(plain.area), 9);
});

test("dead time: a counter that loses counts gives the true rate back", () => {
  const d = 40e-6;
  const rate = (t: number): number => 2e4 * three(t);
  const log = csv((t) => rate(t) / (1 + rate(t) * d));
  const r = first(
    trialOf(log, "scale: free\nnoise: {counting: {over: 1 s, dead-time: 40 us}}", { value: "{column: c, unit: cps}" }),
  );
  expect(r.steps[1].name).toBe("dead time");
  expect(value(r.mean)).toBeCloseTo(value(plain.mean), 6);
  expect(value(r.area)).toBeCloseTo(2e4 * value(plain.area), 4);
});

test("the error of counted curves is what repeated counting shows", () => {
  const noise = seeded(3);
  const means: number[] = [];
  let claimed = 0;
  for (let run = 0; run < 100; run++) {
    const log = csv((t) => {
      const rate = 50 + 3000 * three(t);
      return (rate * 4 + Math.sqrt(rate * 4) * noise.normal()) / 4;
    });
    const r = first(
      trialOf(
        log,
        "scale: free\ncalibration: {blank: 50 cps, rise: 3000 cps, per: 1 g/L}\nnoise: {counting: {over: 4 s}}",
        { value: "{column: c, unit: cps}" },
      ),
    );
    means.push(value(r.area));
    claimed += error(r.area) ** 2 / 100;
  }
  const mean = means.reduce((a, b) => a + b, 0) / means.length;
  const sd = Math.sqrt(means.reduce((s, a) => s + (a - mean) ** 2, 0) / (means.length - 1));
  expect(Math.sqrt(claimed) / sd).toBeGreaterThan(0.75);
  expect(Math.sqrt(claimed) / sd).toBeLessThan(1.6);
});

test("decay is taken out: moments are those of a tracer that stays", () => {
  const log = csv((t) => three(t) * 2 ** (-t / 90));
  const r = first(trialOf(log, "", { top: "tracer: {half-life: 90 min}" }));
  expect(r.codes).toContain("decay-corrected");
  for (const f of ["area", "mean", "variance"] as const) expect(value(r[f]) / value(plain[f])).toBeCloseTo(1, 6);
  expect(value(r.recovery)).toBeCloseTo(value(plain.recovery), 6);
});

describe("readings beyond the limits", () => {
  test("below: the tail is extrapolated, not drawn along the limit, and the curve's figures stay near", () => {
    const cut = csv((t) => Math.max(0.01, three(t)));
    const as = first(trialOf(cut, "limits: {below: 0.01 g/L}"));
    const naive = first(trialOf(cut, ""));
    expect(as.codes).toContain("limits-below");
    expect(Math.abs(value(as.mean) / value(plain.mean) - 1)).toBeLessThan(0.01);
    expect(Math.abs((naive.mean.value ?? 0) / value(plain.mean) - 1)).toBeGreaterThan(0.05);
  });

  test("above: told as a caution", () => {
    const r = first(
      trialOf(
        csv((t) => Math.min(0.3, three(t))),
        "limits: {above: 300 mg/L}",
      ),
    );
    expect(r.codes).toContain("limits-above");
    expect(r.grade).not.toBe("A");
  });
});

test("a gap where tracer passed is told, sparse sampling of a tail is not", () => {
  const holed = `t,c\n${times
    .filter((t) => t < 18 || t > 30)
    .map((t) => `${t},${three(t)}`)
    .join("\n")}\n`;
  expect(first(trialOf(holed, "")).codes).toContain("gap");
  const sparser = `t,c\n${Array.from({ length: 40 }, (_, i) => 0.5 * 1.15 ** i)
    .map((t) => `${t},${three(t)}`)
    .join("\n")}\n`;
  expect(first(trialOf(sparser, "")).codes).not.toContain("gap");
});

test("errors that hang together: intervals of the area hold the truth as often as they say", () => {
  const noise = seeded(5);
  const long = Array.from({ length: 700 }, (_, i) => -240 + i * 0.6);
  const ratios: number[] = [];
  let held = 0;
  for (let run = 0; run < 120; run++) {
    let e = 0;
    const rows = long.map((t) => {
      e = 0.9 * e + 0.004 * Math.sqrt(1 - 0.81) * noise.normal();
      return `${t},${(t > 0 ? three(t) : 0) + e}`;
    });
    const r = first(trialOf(`t,c\n${rows.join("\n")}\n`, ""));
    const off = Math.abs(value(r.area) - value(plain.area)) / error(r.area);
    ratios.push(off);
    if (off < 1.96) held++;
  }
  expect(held / ratios.length).toBeGreaterThan(0.9);
  // Not by errors that are far too wide either: taken as independent they would be four times too small.
  expect(ratios.sort((a, b) => a - b)[60]).toBeGreaterThan(0.3);
});
