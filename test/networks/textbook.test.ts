import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { type MomentsOptions, readMoments } from "../../src/data/moments.js";
import { parseTrial } from "../../src/parse/trial.js";

const min = 60;
const load = (name: string) => {
  const path = `networks/textbook/${name}.yaml`;
  const { document, problems } = parseTrial(readFileSync(path, "utf8"), { path, read: (p) => readFileSync(p) });
  expect(problems).toEqual([]);
  if (!document) throw new Error(`${name} does not parse`);
  return document;
};
const published = (name: string) => JSON.parse(readFileSync(`shared/reference/rtd-examples/${name}.json`, "utf8"));
const reading = (name: string, options: MomentsOptions = {}) => {
  const result = readMoments(load(name), options);
  return { ...result.readings[0], findings: result.findings };
};

describe("eight-point pulse (Levenspiel 1999, examples 11.1 and 13.1)", () => {
  const { published: book, recomputed } = published("eight-point-pulse");

  test("published mean and variance, to the last digit", () => {
    const r = reading("eight-point-pulse");
    expect(r.mean.value).toBeCloseTo(book.mean * min, 9);
    expect(r.variance.value).toBeCloseTo(book.variance * min ** 2, 7);
    expect((r.variance.value ?? 0) / (r.mean.value ?? 1) ** 2).toBeCloseTo(book.sigma_theta2, 3);
    expect(r.findings).toEqual([]);
  });

  test("published dispersion number of the closed vessel, and tanks", () => {
    const r = reading("eight-point-pulse");
    expect(1 / (r.indices.peclet.value ?? 0)).toBeCloseTo(book.dispersion_number_D_over_uL_closed, 3);
    expect(r.indices.peclet.value).toBeCloseTo(recomputed.Pe_closed_closed, 9);
    expect(r.indices.tanks.value).toBeCloseTo(recomputed.trapezoid.tanks_N, 9);
  });

  test("third central moment by trapezoid", () => {
    const r = reading("eight-point-pulse");
    const { third_central_moment: third, variance } = recomputed.trapezoid;
    expect(r.skewness.value).toBeCloseTo(third / variance ** 1.5, 9);
  });
});

describe("thirteen-point pulse (Fogler 2006, examples 13-1 and 13-2)", () => {
  const { published: book, recomputed } = published("thirteen-point-pulse");

  test("published area, mean and variance by Simpson's rule", () => {
    const r = reading("thirteen-point-pulse", { rule: "simpson" });
    expect((r.area.value ?? 0) / (1e-3 * min)).toBeCloseTo(book.area, 1);
    expect((r.mean.value ?? 0) / min).toBeCloseTo(book.mean, 1);
    expect((r.variance.value ?? 0) / min ** 2).toBeCloseTo(book.variance, 1);
    expect((r.mean.value ?? 0) / min).toBeCloseTo(recomputed.simpson_split_0_10_and_10_14.mean, 10);
    expect((r.variance.value ?? 0) / min ** 2).toBeCloseTo(recomputed.simpson_split_0_10_and_10_14.variance, 10);
    expect(r.indices.tanks.value).toBeCloseTo(book.tanks_N, 2);
    expect(Math.abs((r.indices.peclet.value ?? 0) / book.Pe_closed - 1)).toBeLessThan(0.01);
  });

  test("the trapezoid, which is the default, as recomputed", () => {
    const r = reading("thirteen-point-pulse");
    expect((r.mean.value ?? 0) / min).toBeCloseTo(recomputed.trapezoid.mean, 10);
    expect((r.variance.value ?? 0) / min ** 2).toBeCloseTo(recomputed.trapezoid.variance, 10);
  });
});

describe("peaks of a liquid that circulates (Levenspiel 1999, example 11.2)", () => {
  const { published: book, recomputed, data } = published("recirculating-peaks");
  const r = reading("recirculating-peaks", { volume: { value: data.vessel_volume * 1e-3 } });

  test("area from the curve is dose over flow: all tracer is found", () => {
    expect((r.area.value ?? 0) / min).toBeCloseTo(book.area_from_curve, 4);
    expect(r.recovery.value).toBeCloseTo(1, 4);
  });

  test("published share of the vessel that is liquid", () => {
    expect(r.indices["mean-over-tau"].value).toBeCloseTo(book.liquid_fraction, 2);
    expect((r.mean.value ?? 0) / min).toBeCloseTo(recomputed.mean, 3);
    expect((r.indices["effective-volume"].value ?? 0) * 1e3).toBeCloseTo(recomputed.liquid_volume, 0);
  });
});
