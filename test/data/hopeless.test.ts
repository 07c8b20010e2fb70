import { describe, expect, test } from "vitest";
import { readMoments } from "../../src/data/moments.js";
import type { MomentsResult } from "../../src/data/result.js";
import { random } from "../../src/numerics/random.js";
import { tanks, trialOf } from "./helpers.js";

const noise = random(8);
const hundred = Array.from({ length: 100 }, (_, i) => i * 0.5);
const curve = tanks(3, 8);

/** No figure that someone could take for a result. */
function saysNothing({ readings, grade }: MomentsResult): void {
  expect(grade).toBe("C");
  for (const r of readings) {
    for (const f of [r.recovery, r.mean, r.variance, r.skewness, r.t10, r.t50, r.t90]) expect(f.value).toBeUndefined();
    expect(r.indices).toEqual({});
    expect(r.curve).toBeUndefined();
  }
}

describe("hopeless data end with a finding and no number", () => {
  test.each<[string, [number, number][], string]>([
    ["all zeros", hundred.map((t) => [t, 0]), "no-signal"],
    ["a constant", hundred.map((t) => [t, 0.37]), "no-signal"],
    [
      "three points",
      [
        [0, 0],
        [4, 0.5],
        [9, 0.1],
      ],
      "few-points",
    ],
    ["two points above nothing", hundred.map((t, i) => [t, i === 40 || i === 41 ? 1 : 0]), "few-points"],
    ["only noise", hundred.map((t) => [t, 0.02 * noise.normal()]), "only-noise"],
    ["noise over an offset", hundred.map((t) => [t, 3 + 0.02 * noise.normal()]), "only-noise"],
    ["a curve upside down", hundred.map((t) => [t, -curve(t)]), "few-points"],
  ])("%s", (_, points, code) => {
    const { document, problems } = trialOf(points);
    if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
    const result = readMoments(document);
    expect(result.findings.map((f) => f.code)).toEqual([code]);
    expect(result.findings[0].weight).toBe("stop");
    saysNothing(result);
  });

  test.each<[string, [number | string, number | string][], string]>([
    ["words of no number where values should be", hundred.map((t) => [t, "NaN"]), "points-few"],
    ["a word that nobody declared", hundred.map((t, i) => [t, i === 50 ? "ERR" : curve(t)]), "cell-not-number"],
    ["time that runs backwards", hundred.map((t) => [50 - t, curve(t)]), "time-back"],
    ["a clock set back on the way", hundred.map((t, i) => [i > 60 ? t - 10 : t, curve(t)]), "time-back"],
    [
      "two points",
      [
        [0, 0],
        [1, 1],
      ],
      "points-few",
    ],
  ])("%s: refused with its row", (_, points, code) => {
    const { document, problems } = trialOf(points as [number, number][]);
    expect(document).toBeUndefined();
    expect(problems.filter((p) => p.severity === "error").map((p) => p.code)).toEqual([code]);
  });

  test("some words of no number are missing values, no more", () => {
    const { document } = trialOf(hundred.map((t, i) => [t, i % 9 === 4 ? ("NaN" as unknown as number) : curve(t)]));
    expect(document?.readings[0].series?.missing).toBe(11);
    expect(document && readMoments(document).readings[0].mean.value).toBeDefined();
  });
});
