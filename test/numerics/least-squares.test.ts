import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { leastSquares } from "../../src/numerics/least-squares.js";

const t = Array.from({ length: 21 }, (_, i) => i / 4);
const decay = (p: ArrayLike<number>): number[] => t.map((s) => p[0] * Math.exp(-p[1] * s) + p[2]);
const wiggle = t.map((_, i) => 0.01 * Math.sin(7 * i));
const data = decay([3, 0.8, 0.5]).map((y, i) => y + wiggle[i]);
const misfit = (p: ArrayLike<number>): number[] => decay(p).map((y, i) => y - data[i]);

describe("linear problems", () => {
  test("a straight line with its textbook standard errors, in one go", () => {
    // Closed forms: N.R. Draper, H. Smith, Applied Regression Analysis, 3rd ed., Wiley 1998, ch. 1
    const x = [1, 2, 3, 4, 5];
    const y = [2.1, 3.9, 6.2, 7.8, 10.1];
    const fit = leastSquares({ start: [0, 0], residuals: (p) => x.map((v, i) => p[0] + p[1] * v - y[i]) });
    const slope = x.reduce((s, v, i) => s + (v - 3) * y[i], 0) / 10;
    const intercept = y.reduce((s, v) => s + v, 0) / 5 - 3 * slope;
    const rss = x.reduce((s, v, i) => s + (intercept + slope * v - y[i]) ** 2, 0);
    expect(fit.converged).toBe(true);
    // the differences know the columns to about 1e-11, so the optimum to that part of the residuals
    expect(fit.parameters[0]).toBeCloseTo(intercept, 11);
    expect(fit.parameters[1]).toBeCloseTo(slope, 11);
    expect(fit.residualSumOfSquares).toBeCloseTo(rss, 14);
    expect(fit.standardErrors[1]).toBeCloseTo(Math.sqrt(rss / 3 / 10), 10);
    expect(fit.standardErrors[0]).toBeCloseTo(Math.sqrt((rss / 3) * (1 / 5 + 9 / 10)), 10);
    expect(fit.covariance[1]).toBeCloseTo((-3 * rss) / 3 / 10, 10);
    expect(fit.evaluations).toBeLessThan(60);
  });

  test("an exact fit", () => {
    const fit = leastSquares({ start: [1, 1], residuals: (p) => [p[0] - 2, p[1] + 5] });
    expect(fit.converged).toBe(true);
    expect(Array.from(fit.parameters)).toEqual([2, -5]);
    expect(fit.covariance.every(Number.isNaN)).toBe(true); // nothing left to estimate a variance from
  });

  test("no parameters", () => {
    const fit = leastSquares({ start: [], residuals: () => [1, 2] });
    expect(fit.converged).toBe(true);
    expect(fit.residualSumOfSquares).toBe(5);
  });
});

describe("invariance", () => {
  const plain = leastSquares({ start: [1, 2, 0], residuals: misfit });

  test("the units of the parameters change nothing", () => {
    const units = [1e6, 1e-5, 1e3];
    const fit = leastSquares({
      start: [1 / units[0], 2 / units[1], 0],
      scale: units.map((u) => 1 / u),
      residuals: (p) => misfit(p.map((v, j) => v * units[j])),
    });
    for (let j = 0; j < 3; j++) {
      expect((fit.parameters[j] * units[j]) / plain.parameters[j]).toBeCloseTo(1, 9);
      expect((fit.standardErrors[j] * units[j]) / plain.standardErrors[j]).toBeCloseTo(1, 8);
    }
  });

  test("a given Jacobian, flat or by rows, leads to the same place", () => {
    const row = (p: Float64Array, s: number): number[] => {
      const e = Math.exp(-p[1] * s);
      return [e, -p[0] * s * e, 1];
    };
    for (const jacobian of [
      (p: Float64Array) => t.map((s) => row(p, s)),
      (p: Float64Array) => t.flatMap((s) => row(p, s)),
    ]) {
      const fit = leastSquares({ start: [1, 2, 0], residuals: misfit, jacobian });
      expect(fit.converged).toBe(true);
      expect(fit.evaluations).toBeLessThan(plain.evaluations / 2);
      for (let j = 0; j < 3; j++) {
        expect(fit.parameters[j]).toBeCloseTo(plain.parameters[j], 10);
        expect(fit.standardErrors[j] / plain.standardErrors[j]).toBeCloseTo(1, 8);
      }
    }
  });

  test("a residual array that is used again each call does no harm", () => {
    const same = new Float64Array(t.length);
    const fit = leastSquares({
      start: [1, 2, 0],
      residuals: (p) => {
        same.set(misfit(p));
        return same;
      },
    });
    expect(fit.parameters).toEqual(plain.parameters);
  });

  test("the gradient is 0 at the end", () => {
    for (let j = 0; j < 3; j++) {
      const g = plain.residuals.reduce((s, r, i) => s + r * plain.jacobian[i * 3 + j], 0);
      expect(Math.abs(g)).toBeLessThan(1e-11);
    }
  });
});

describe("bounds", () => {
  test("a bounded linear problem ends where the optimality conditions hold, and inside", () => {
    const entry = fc.integer({ min: -30, max: 30 }).map((k) => k / 10);
    fc.assert(
      fc.property(
        fc.array(entry, { minLength: 15, maxLength: 15 }),
        fc.array(entry, { minLength: 5, maxLength: 5 }),
        (a, b) => {
          for (let j = 0; j < 3; j++) a[j * 3 + j] += 7;
          const fit = leastSquares({
            start: [0.5, 0.5, 0.5],
            lower: [0, 0, 0],
            upper: [1, 1, 1],
            residuals: (p) => b.map((v, i) => a[i * 3] * p[0] + a[i * 3 + 1] * p[1] + a[i * 3 + 2] * p[2] - v),
          });
          expect(fit.converged).toBe(true);
          for (let j = 0; j < 3; j++) {
            expect(fit.parameters[j]).toBeGreaterThanOrEqual(0);
            expect(fit.parameters[j]).toBeLessThanOrEqual(1);
            const g = fit.residuals.reduce((s, r, i) => s + r * a[i * 3 + j], 0);
            if (fit.atBound[j] === "lower") expect(g).toBeGreaterThan(-1e-6);
            else if (fit.atBound[j] === "upper") expect(g).toBeLessThan(1e-6);
            else expect(Math.abs(g)).toBeLessThan(1e-6);
          }
        },
      ),
      { numRuns: 60 },
    );
  });

  test("the residuals are never asked outside, not even for differences", () => {
    const lower = [0, 0.9, 0];
    const upper = [2.5, 5, 1];
    const fit = leastSquares({
      start: [2.5, 0.9, 0],
      lower,
      upper,
      residuals: (p) => {
        p.forEach((v, j) => {
          expect(v).toBeGreaterThanOrEqual(lower[j]);
          expect(v).toBeLessThanOrEqual(upper[j]);
        });
        return misfit(p);
      },
    });
    expect(fit.converged).toBe(true);
    expect(fit.atBound.some((side) => side !== undefined)).toBe(true);
  });

  test("a parameter on its bound is named, has no standard error, and the others have theirs with it held", () => {
    const bounded = leastSquares({ start: [1, 2, 0], upper: [9, 9, 0.4], residuals: misfit });
    const held = leastSquares({ start: [1, 2], residuals: (p) => misfit([p[0], p[1], 0.4]) });
    expect(bounded.atBound).toEqual([undefined, undefined, "upper"]);
    expect(bounded.standardErrors[2]).toBeNaN();
    for (let j = 0; j < 2; j++) {
      expect(bounded.parameters[j]).toBeCloseTo(held.parameters[j], 9);
      expect(bounded.standardErrors[j] / held.standardErrors[j]).toBeCloseTo(1, 7);
    }
  });

  test("equal bounds hold a parameter; a start outside is brought in", () => {
    const fit = leastSquares({ start: [1, 99, 0], lower: [0, 0.8, -9], upper: [9, 0.8, 9], residuals: misfit });
    expect(fit.converged).toBe(true);
    expect(fit.parameters[1]).toBe(0.8);
  });

  test("bounds that cross, or of another length, are a mistake of the caller", () => {
    expect(() => leastSquares({ start: [1], lower: [2], upper: [1], residuals: () => [0] })).toThrow(RangeError);
    expect(() => leastSquares({ start: [1, 2], lower: [2], residuals: () => [0] })).toThrow(RangeError);
  });
});

describe("where there are no residuals", () => {
  test("non-finite ones turn the search back", () => {
    const fit = leastSquares({
      start: [0.2],
      residuals: (p) => [Math.log(1 - p[0]) - Math.log(0.001), p[0] < 1 ? 0 : Number.NaN],
    });
    expect(fit.converged).toBe(true);
    expect(fit.parameters[0]).toBeCloseTo(0.999, 9);
  });

  test("a step that is not allowed is cut back, and nothing forbidden is ever computed", () => {
    // minimum of (x - 2)^2 + (y - 2)^2 on x + y <= 3 is forbidden beyond; the search must stay within and come near
    const fit = leastSquares({
      start: [0.2, 0.1],
      allowed: (p) => p[0] + p[1] <= 3,
      residuals: (p) => {
        expect(p[0] + p[1]).toBeLessThanOrEqual(3);
        return [p[0] - 2, p[1] - 2];
      },
    });
    expect(fit.residualSumOfSquares).toBeLessThan(0.6);
  });

  test("a start without residuals is an answer", () => {
    const fit = leastSquares({ start: [-1], residuals: (p) => [Math.sqrt(p[0])] });
    expect(fit).toMatchObject({ converged: false, stopped: "bad-start" });
    expect(leastSquares({ start: [1], allowed: () => false, residuals: () => [1] }).stopped).toBe("bad-start");
  });
});

describe("what the data cannot tell apart", () => {
  test("has an infinite variance, and the rest keeps its own", () => {
    const fit = leastSquares({ start: [1, 1, 1], residuals: (p) => misfit([p[0] + p[1], 0.8, p[2]]) });
    const clear = leastSquares({ start: [1, 1], residuals: (p) => misfit([p[0], 0.8, p[1]]) });
    expect(fit.parameters[0] + fit.parameters[1]).toBeCloseTo(clear.parameters[0], 9);
    expect(fit.standardErrors[0]).toBe(Number.POSITIVE_INFINITY);
    expect(fit.standardErrors[1]).toBe(Number.POSITIVE_INFINITY);
    // one degree of freedom less, for the parameter that adds nothing
    expect(fit.standardErrors[2] / clear.standardErrors[1]).toBeCloseTo(Math.sqrt(19 / 18), 6);
  });

  test("a parameter without effect", () => {
    const fit = leastSquares({ start: [1, 2, 0, 7], residuals: (p) => misfit(p) });
    expect(fit.converged).toBe(true);
    expect(fit.parameters[3]).toBe(7);
    expect(fit.standardErrors[3]).toBe(Number.POSITIVE_INFINITY);
    expect(Number.isFinite(fit.standardErrors[0])).toBe(true);
  });

  test("fewer residuals than parameters", () => {
    const fit = leastSquares({ start: [1, 1], residuals: (p) => [p[0] + p[1] - 3] });
    expect(fit.residualSumOfSquares).toBeLessThan(1e-20);
    expect(fit.standardErrors.every(Number.isNaN)).toBe(true);
  });
});

describe("stopping", () => {
  test("at the evaluations allowed, with the best so far and its standard errors", () => {
    const fit = leastSquares({ start: [1, 2, 0], residuals: misfit, maxEvaluations: 9 });
    expect(fit).toMatchObject({ converged: false, stopped: "evaluations" });
    expect(fit.residualSumOfSquares).toBeLessThan(misfit([1, 2, 0]).reduce((s, r) => s + r * r, 0));
    expect(fit.standardErrors.every(Number.isFinite)).toBe(true);
  });

  test("when cancelled, with the best so far", () => {
    let calls = 0;
    const fit = leastSquares({ start: [1, 2, 0], residuals: misfit, cancelled: () => ++calls > 12 });
    expect(fit).toMatchObject({ converged: false, stopped: "cancelled" });
    expect(fit.residualSumOfSquares).toBeLessThan(misfit([1, 2, 0]).reduce((s, r) => s + r * r, 0));
  });

  test("without polish it is cheaper and has no statistics", () => {
    const fit = leastSquares({ start: [1, 2, 0], residuals: misfit, polish: false });
    const whole = leastSquares({ start: [1, 2, 0], residuals: misfit });
    expect(fit.converged).toBe(true);
    expect(fit.evaluations).toBeLessThan(whole.evaluations / 1.5);
    expect(fit.parameters[1]).toBeCloseTo(whole.parameters[1], 5);
    expect(fit.standardErrors.every(Number.isNaN)).toBe(true);
  });

  test("progress is told: the sum of squares never rises", () => {
    const sums: number[] = [];
    leastSquares({ start: [1, 2, 0], residuals: misfit, progress: (at) => sums.push(at.residualSumOfSquares) });
    expect(sums.length).toBeGreaterThan(2);
    for (let k = 1; k < sums.length; k++) expect(sums[k]).toBeLessThanOrEqual(sums[k - 1]);
  });
});
