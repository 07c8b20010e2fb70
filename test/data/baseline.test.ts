import { describe, expect, test } from "vitest";
import { random } from "../../src/numerics/random.js";
import { backmix } from "../cli/fake.js";
import { readingOf, sampled, tanks, twoZones } from "./helpers.js";

const min = 60;
/** 10 L at 1 L/min, of which 2.6 L trade 0.09 L/min with the rest: mean 10 min, slow time constant 31.5 min. Demo. */
const corner = twoZones(7.4, 2.6, 0.09, 1);

interface Record {
  readonly curve: (t: number) => number;
  readonly before: number;
  readonly until: number;
  readonly noise: number;
  readonly baseline: "constant" | "drift";
}

/** Readings of the same test with other noise: 400 points over a background, with a drift where one is declared. */
function repeated({ curve, before, until, noise, baseline }: Record, seeds: number) {
  return Array.from({ length: seeds }, (_, seed) => {
    const { normal } = random(seed + 1);
    const drift = baseline === "drift" ? 1e-4 : 0;
    const points = sampled(
      (s) => 0.05 + drift * s + (s < before ? 0 : curve(s - before)) + noise * normal(),
      until + before,
      400,
    );
    return readingOf(
      points,
      {
        injection: `{at: feed, pulse: 7.4 g, start: ${before} min}`,
        flows: "{feed: 1 L/min}",
        reading: `baseline: ${baseline}`,
      },
      { volume: { value: 0.01 } },
    );
  });
}

describe("the mean of a vessel with a slow corner: the error says how far it is off", () => {
  test.each<[string, number, number, number, "constant" | "drift"]>([
    ["blanks before, drift, three slow time constants", 5, 90, 0.001, "drift"],
    ["the same, more noise", 5, 90, 0.01, "drift"],
    ["blanks before, drift, two slow time constants, noisy", 5, 60, 0.01, "drift"],
    ["blanks before, a constant", 5, 60, 0.001, "constant"],
    ["the same, more noise", 5, 90, 0.01, "constant"],
    ["no blank before, a constant", 0, 90, 0.001, "constant"],
    ["no blank before, a drift", 0, 90, 0.01, "drift"],
  ])("%s", (_, before, until, noise, baseline) => {
    const found = repeated({ curve: corner, before, until, noise, baseline }, 20);
    const told = found.flatMap((r) => (r.mean.value === undefined ? [] : [r.mean]));
    expect(told.length).toBeGreaterThanOrEqual(18);
    const off = told.map((m) => Math.abs(m.value - 10 * min) / (m.standardError ?? 0));
    // Linear theory of decays: 85 % within two standard errors is what it promises here, not 95.
    expect(off.filter((z) => z <= 2).length).toBeGreaterThanOrEqual(0.85 * off.length);
    expect(off.filter((z) => z > 4)).toEqual([]);
    // A drift under a tail that has not ended, or a tail that may be hidden, is no number to rely on.
    if (baseline === "drift" || noise > 0.001) expect(found.filter((r) => r.grade === "A")).toEqual([]);
  });

  test("where tail and drift can be told apart, the interval is narrow again", () => {
    const found = repeated({ curve: corner, before: 5, until: 90, noise: 0.001, baseline: "drift" }, 10);
    const errors = found.map((r) => ("standardError" in r.mean ? (r.mean.standardError ?? 0) / min : Number.NaN));
    expect(errors.sort((a, b) => a - b)[5]).toBeLessThan(1);
    expect(found[0].codes).toContain("tail-with-baseline");
  });
});

test("a curve that has ended over a constant known before it keeps grade A and a small error", () => {
  const curve = (t: number) => 7.4 * tanks(3, 10)(t);
  for (const r of repeated({ curve, before: 5, until: 60, noise: 0.0005, baseline: "constant" }, 10)) {
    expect(r.grade).toBe("A");
    const error = "standardError" in r.mean ? (r.mean.standardError ?? 0) / min : Number.NaN;
    expect(error).toBeLessThan(0.1);
    expect(Math.abs((r.mean.value ?? 0) / min - 10)).toBeLessThan(0.1);
  }
});

test("a power law over a constant is still told", () => {
  const curve = (t: number) => (t < 0.2 ? 5 * t : (t / 0.2) ** -1.5);
  const found = repeated({ curve, before: 2, until: 40, noise: 0.0005, baseline: "constant" }, 10);
  expect(found.filter((r) => r.codes.includes("tail-power")).length).toBeGreaterThanOrEqual(7);
});

describe("the demo: a slow corner under a drift", () => {
  test.each([
    ["salt-normal", 60],
    ["salt-half", 120],
  ])("%s: the interval covers volume over flow, and there is no grade A", async (trial, truth) => {
    const { out } = await backmix(["moments", `networks/demo/${trial}.yaml`, "--json"]);
    const { readings, grade } = JSON.parse(out);
    const { value, standardError } = readings[0].mean;
    expect(Math.abs(value - truth)).toBeLessThan(2 * standardError);
    expect(standardError).toBeLessThan(0.1 * truth);
    expect(grade).toBe("B");
  });

  test("the last cleaning step is what is reported", async () => {
    const { out } = await backmix(["moments", "networks/demo/salt-normal.yaml", "--json"]);
    const [reading] = JSON.parse(out).readings;
    const names = reading.steps.map((s: { name: string }) => s.name);
    expect(names.slice(-4)).toEqual(["baseline", "injection width", "detector lag", "front and tail"]);
    const last = reading.steps[names.length - 1];
    for (const figure of ["area", "mean", "variance", "t10"])
      expect([figure, last[figure].value]).toEqual([figure, reading[figure].value]);
    expect(last.approximate).toBe(true);
    expect(reading.percentilesApproximate).toBe(true);
  });
});
