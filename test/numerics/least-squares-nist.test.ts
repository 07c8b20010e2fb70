import { readdirSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { leastSquares } from "../../src/numerics/least-squares.js";
import { formula } from "./infix.js";

/** NIST Statistical Reference Datasets (StRD), nonlinear regression; one file per set, sources inside. */
interface StrdSet {
  readonly name: string;
  readonly model: string;
  readonly response: string;
  readonly predictors: readonly string[];
  readonly start1: readonly number[];
  readonly start2: readonly number[];
  readonly certified: {
    readonly parameters: readonly number[];
    readonly standard_deviations: readonly number[];
    readonly residual_sum_of_squares: number;
  };
  readonly data: Readonly<Record<string, readonly number[]>>;
}

const folder = new URL("../../shared/reference/nist-strd/", import.meta.url);
const sets = readdirSync(folder).map((file) => JSON.parse(readFileSync(new URL(file, folder), "utf8")) as StrdSet);

/** Digits that agree: -log10 of the relative difference (McCullough 1998), at most 11, which is what is certified. */
const digits = (x: number, certified: number): number =>
  Math.min(11, -Math.log10(Math.abs(x - certified) / Math.abs(certified)));
const fewest = (x: ArrayLike<number>, certified: readonly number[]): number =>
  Math.min(...certified.map((c, j) => digits(x[j], c)));

function fit(set: StrdSet, start: readonly number[]) {
  const model = formula(set.model);
  const names: Record<string, number> = {};
  const y = set.response === "ln(y)" ? set.data.y.map(Math.log) : set.data[set.response];
  return leastSquares({
    start,
    residuals: (p) => {
      p.forEach((b, j) => {
        names[`b${j + 1}`] = b;
      });
      return y.map((observed, i) => {
        for (const x of set.predictors) names[x] = set.data[x][i];
        return model(names) - observed;
      });
    },
  });
}

describe("NIST StRD nonlinear regression", () => {
  test.each(sets.flatMap((set) => [1, 2].map((start) => ({ name: set.name, start, set }))))(
    "$name from start $start",
    ({ set, start }) => {
      const result = fit(set, start === 1 ? set.start1 : set.start2);
      expect(result.converged).toBe(true);
      expect(fewest(result.parameters, set.certified.parameters)).toBeGreaterThanOrEqual(6);
      if (set.name === "Lanczos1") {
        // Its certified residual sum, 1.4e-25, is rounding of the data: so are the standard deviations.
        expect(result.residualSumOfSquares).toBeLessThan(1e-20);
        return;
      }
      expect(fewest(result.standardErrors, set.certified.standard_deviations)).toBeGreaterThanOrEqual(5);
      expect(digits(result.residualSumOfSquares, set.certified.residual_sum_of_squares)).toBeGreaterThanOrEqual(8);
    },
  );
});
