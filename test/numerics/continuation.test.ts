import { describe, expect, test } from "vitest";
import { type Family, followCurve } from "../../src/numerics/continuation.js";

const scalar = (f: (y: number, p: number) => number, slope: (y: number, p: number) => number): Family => ({
  size: 1,
  weight: 1,
  residual: (y, p, out) => {
    out[0] = f(y[0], p);
    return true;
  },
  jacobian: (y, p, out) => {
    out[0] = slope(y[0], p);
    return true;
  },
});

describe("curves of solutions", () => {
  // p = 0.5 + y^3 - y / 4 turns at y = -+1/sqrt(12), p = 0.5 +- 1 / (6 sqrt(12)).
  const cubic = scalar(
    (y, p) => 0.5 + y ** 3 - y / 4 - p,
    (y) => 3 * y * y - 0.25,
  );

  test("an S is followed through both turns, which are found to rounding", () => {
    const { points, end } = followCurve(cubic, { y: Float64Array.of(-0.9), p: 0.5 - 0.729 + 0.225 }, [-0.1, 1.1], 1);
    expect(end).toBe("left");
    const turns = points.filter((q) => q.turn);
    const y = 1 / Math.sqrt(12);
    expect(turns.map((q) => q.p)).toEqual([expect.closeTo(0.5 + y / 6, 12), expect.closeTo(0.5 - y / 6, 12)]);
    expect(turns.map((q) => q.y[0])).toEqual([expect.closeTo(-y, 6), expect.closeTo(y, 6)]);
    for (const q of points) expect(Math.abs(0.5 + q.y[0] ** 3 - q.y[0] / 4 - q.p)).toBeLessThan(1e-9);
    expect(points.at(-1)?.p).toBe(1.1);
  });

  test("a closed curve comes back to where it began", () => {
    const circle = scalar(
      (y, p) => y * y + (p - 0.5) ** 2 - 0.04,
      (y) => 2 * y,
    );
    const { points, end } = followCurve(circle, { y: Float64Array.of(0.2), p: 0.5 }, [0, 1], 1);
    expect(end).toBe("closed");
    expect(points.filter((q) => q.turn).map((q) => q.p)).toEqual([expect.closeTo(0.7, 10), expect.closeTo(0.3, 10)]);
  });

  test("what cannot be evaluated ends a curve", () => {
    const wall = scalar(
      (y, p) => (p > 0.6 ? Number.NaN : y - p),
      () => 1,
    );
    const cut: Family = { ...wall, residual: (y, p, f) => wall.residual(y, p, f) && Number.isFinite(f[0]) };
    const { points, end } = followCurve(cut, { y: Float64Array.of(0.5), p: 0.5 }, [0, 1], 1);
    expect(end).toBe("stuck");
    expect(points.at(-1)?.p).toBeGreaterThan(0.59);
  });
});
