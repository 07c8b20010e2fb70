import { describe, expect, test } from "vitest";
import { integrate } from "../../src/numerics/integrate.js";
import { reference } from "./ode-problems.js";

const methods = ["nonstiff", "stiff", "auto"] as const;

const furthest = (a: ArrayLike<number>, b: readonly number[]): number =>
  Math.max(...b.map((v, i) => Math.abs(a[i] - v)));

const decay = (_t: number, y: Float64Array, dy: Float64Array): void => {
  dy[0] = -y[0];
};

describe("published problems", () => {
  test("Brusselator to a few 1e-9 at default tolerance", () => {
    const { problem, solution } = reference("brusselator");
    const run = integrate(problem);
    expect(run.end).toBe("reached");
    expect(furthest(run.last, solution)).toBeLessThan(1e-8);
  });

  test("Arenstorf's orbit closes", () => {
    const { problem, solution } = reference("arenstorf");
    // The orbit magnifies a local error about a million times; an eighth-order method at 1e-13 misses by 3.5e-10.
    const run = integrate({ ...problem, relative: 1e-13, absolute: 1e-13 });
    expect(run.end).toBe("reached");
    expect(furthest(run.last, solution)).toBeLessThan(1e-8);
  });

  test("a tighter tolerance brings a smaller error, in proportion", () => {
    const { problem, solution } = reference("brusselator");
    const errors = [1e-5, 1e-7, 1e-9, 1e-11].map((tolerance) =>
      furthest(integrate({ ...problem, relative: tolerance, absolute: tolerance }).last, solution),
    );
    for (let k = 1; k < errors.length; k++) expect(errors[k]).toBeLessThan(errors[k - 1] / 5);
    expect(errors[3]).toBeLessThan(1e-10);
  });
});

describe.each(methods)("outputs, %s", (method) => {
  test("lie on the curve, ends included, wherever they are asked", () => {
    const outputs = Array.from({ length: 301 }, (_, i) => i / 30);
    const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
      dy[0] = y[1];
      dy[1] = -y[0];
    };
    const run = integrate({ method, rhs, start: [0, 1], from: 0, to: 10, outputs });
    expect(Array.from(run.times)).toEqual(outputs);
    for (const [k, t] of outputs.entries())
      expect(furthest(run.states[k], [Math.sin(t), Math.cos(t)])).toBeLessThan(2e-9);
  });

  test("outside the interval are left out; none given means the end", () => {
    const run = integrate({ method, rhs: decay, start: [1], from: 0, to: 1, outputs: [-1, 0, 0.5, 1, 2] });
    expect(Array.from(run.times)).toEqual([0, 0.5, 1]);
    expect(Array.from(integrate({ method, rhs: decay, start: [1], from: 0, to: 1 }).times)).toEqual([1]);
  });

  test("a span of no length gives the start", () => {
    const run = integrate({ method, rhs: decay, start: [7], from: 3, to: 3, outputs: [3, 3], stops: [3] });
    expect(run.states.map((s) => s[0])).toEqual([7, 7]);
    expect(run.end).toBe("reached");
  });

  test("time may run backwards, with outputs and stops", () => {
    const run = integrate({
      method,
      rhs: decay,
      start: [Math.exp(-2)],
      from: 2,
      to: 0,
      outputs: [2, 1, 0],
      stops: [1.5],
    });
    expect(Array.from(run.times)).toEqual([2, 1, 0]);
    expect(run.states[1][0]).toBeCloseTo(Math.exp(-1), 9);
    expect(run.states[2][0]).toBeCloseTo(1, 9);
  });

  test("work on any scale of time", () => {
    for (const span of [1e-7, 1e9]) {
      const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
        dy[0] = -y[0] / span;
      };
      const run = integrate({ method, rhs, start: [1], from: span, to: 3 * span, outputs: [2 * span, 3 * span] });
      expect(run.states[0][0]).toBeCloseTo(Math.exp(-1), 9);
      expect(run.states[1][0]).toBeCloseTo(Math.exp(-2), 9);
    }
  });
});

describe.each(methods)("stops, %s", (method) => {
  const pulse =
    (inside: (t: number) => boolean) =>
    (t: number, y: Float64Array, dy: Float64Array): void => {
      dy[0] = (inside(t) ? 1000 : 0) - y[0];
    };
  // a tank fed 1000 for 1e-3 out of 100 time units
  const exact = 1000 * (1 - Math.exp(-1e-3)) * Math.exp(-(100 - 50.001));

  test.each([
    ["closed on the left", (t: number) => t >= 50 && t < 50.001],
    ["closed on the right", (t: number) => t > 50 && t <= 50.001],
  ])("a short pulse is neither stepped over nor smeared: %s", (_name, inside) => {
    const run = integrate({
      method,
      rhs: pulse(inside),
      start: [0],
      from: 0,
      to: 100,
      stops: [50, 50.001],
      outputs: [50, 50.001, 100],
    });
    expect(run.states[0][0]).toBe(0);
    expect(run.states[1][0]).toBeCloseTo(1000 * (1 - Math.exp(-1e-3)), 9);
    expect(Math.abs(run.states[2][0] - exact)).toBeLessThan(1e-12);
  });

  test("in any order, doubled or outside, are sorted out", () => {
    const run = integrate({ method, rhs: decay, start: [1], from: 0, to: 1, stops: [0.9, 5, 0.2, 0.2, -1, 0, 1] });
    expect(run.last[0]).toBeCloseTo(Math.exp(-1), 9);
  });

  test("a corner costs neither accuracy nor steps once it is a stop", () => {
    const rhs = (t: number, _y: Float64Array, dy: Float64Array): void => {
      dy[0] = Math.abs(t - Math.SQRT2);
    };
    const run = integrate({ method, rhs, start: [0], from: 0, to: 3, stops: [Math.SQRT2] });
    expect(run.last[0]).toBeCloseTo((2 + (3 - Math.SQRT2) ** 2) / 2, 13);
    expect(run.stats.rejected).toBe(0);
  });
});

test.each(methods)("a system that rests is no reason for small steps, %s", (method) => {
  // Rounding keeps the slope of a tank at rest just off 0, and of random sign from one evaluation to the next.
  const rhs = (t: number, y: Float64Array, dy: Float64Array): void => {
    dy[0] = 300 * (1 / 3 - y[0]) + 1e-13 * Math.sign(Math.sin(1e9 * t));
  };
  const run = integrate({ method, rhs, start: [1 / 3], from: 0, to: 1, outputs: [0.5, 1] });
  expect(run.end).toBe("reached");
  expect(run.stats.rhs).toBeLessThan(5000);
});

describe.each(methods)("failure is an answer, %s", (method) => {
  test("a right-hand side that is NaN at once, with and without outputs", () => {
    const rhs = (_t: number, _y: Float64Array, dy: Float64Array): void => {
      dy[0] = Number.NaN;
    };
    const run = integrate({ method, rhs, start: [1], from: 2, to: 5 });
    expect(run.end).toEqual({ stopped: 2, why: "not-finite" });
    expect(run.states).toEqual([]);
    expect(Array.from(run.last)).toEqual([1]);
    const asked = integrate({ method, rhs, start: [1], from: 2, to: 5, outputs: [2, 3] });
    expect(asked.states.map((s) => s[0])).toEqual([1]);
  });

  test.each([[Number.NaN], [Number.POSITIVE_INFINITY], [Number.NEGATIVE_INFINITY]])(
    "a right-hand side that becomes %s keeps what came before",
    (bad) => {
      const rhs = (t: number, _y: Float64Array, dy: Float64Array): void => {
        dy[0] = t > 2 ? bad : 1;
      };
      for (const outputs of [[1, 1.9, 3], undefined]) {
        const run = integrate({ method, rhs, start: [0], from: 0, to: 5, ...(outputs ? { outputs } : {}) });
        const end = run.end as { stopped: number; why: string };
        expect(end.why).toBe("not-finite");
        expect(end.stopped).toBeCloseTo(2, 6);
        expect(run.last[0]).toBeCloseTo(end.stopped, 6);
        if (outputs) expect(run.states.map((s) => s[0])).toEqual([expect.closeTo(1, 9), expect.closeTo(1.9, 9)]);
      }
    },
  );

  test("a NaN in a trial step alone only makes the step smaller", () => {
    // Torricelli's law: the square root of a negative depth is NaN, and a long trial step gets there.
    const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
      dy[0] = -Math.sqrt(y[0]);
    };
    const run = integrate({ method, rhs, start: [1], from: 0, to: 1.99, outputs: [1, 1.99] });
    expect(run.end).toBe("reached");
    expect(run.states[0][0]).toBeCloseTo(0.25, 8);
    expect(run.states[1][0]).toBeCloseTo(0.005 ** 2, 8);
  });

  test("a solution that runs to infinity stops where it does", () => {
    const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
      dy[0] = y[0] * y[0];
    };
    const run = integrate({ method, rhs, start: [1], from: 0, to: 5, outputs: [0.5, 2] });
    expect(run.end).toMatchObject({ stopped: expect.closeTo(1, 6) });
    expect(run.states.length).toBe(1);
    expect(run.states[0][0]).toBeCloseTo(2, 8);
  });

  test("a start that is not finite", () => {
    expect(integrate({ method, rhs: decay, start: [Number.NaN], from: 0, to: 1 }).end).toEqual({
      stopped: 0,
      why: "not-finite",
    });
  });

  test("an error of the right-hand side itself is passed on", () => {
    const rhs = (): void => {
      throw new TypeError("mine");
    };
    expect(() => integrate({ method, rhs, start: [1], from: 0, to: 1 })).toThrow(TypeError);
  });
});

test("a stiff system runs out of the steps allowed", () => {
  const rhs = (t: number, y: Float64Array, dy: Float64Array): void => {
    dy[0] = -1e6 * (y[0] - Math.cos(t));
  };
  const problem = { rhs, start: [1], from: 0, to: 100 };
  const run = integrate({ ...problem, method: "nonstiff", maxSteps: 200 });
  expect(run.end).toMatchObject({ why: "too-many-steps" });
  expect(run.stats.steps).toBe(200);
  expect(run.last[0]).toBeCloseTo(1, 3);
  for (const method of ["stiff", "auto"] as const) {
    const short = integrate({ ...problem, method, maxSteps: 5 });
    expect(short.end).toMatchObject({ why: "too-many-steps" });
    expect(short.stats.steps).toBe(5);
  }
});

test("an absolute tolerance of 0, or one per component, is taken", () => {
  const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
    dy[0] = -y[0];
    dy[1] = 0;
  };
  const run = integrate({ rhs, start: [1e-20, 0], from: 0, to: 1, absolute: 0 });
  expect(run.last[0] / 1e-20).toBeCloseTo(Math.exp(-1), 8);
  const loose = integrate({ rhs, start: [1, 0], from: 0, to: 1, absolute: [1e-3, 1e-12], relative: 1e-3 });
  expect(loose.stats.rhs).toBeLessThan(run.stats.rhs);
});

test("outputs in any order come in that order, each its own", () => {
  const grows = (_: number, y: Float64Array, dy: Float64Array): void => {
    dy[0] = y[0];
  };
  const { times, states } = integrate({ rhs: grows, start: [1], from: 0, to: 1, outputs: [1, 0.5, 2, 0.25, 0.5] });
  expect([...times]).toEqual([1, 0.5, 0.25, 0.5]);
  states.forEach((y, k) => {
    expect(y[0]).toBeCloseTo(Math.exp(times[k]), 8);
  });
});

test("times, tolerances and methods that are none are refused", () => {
  const rhs = (_: number, y: Float64Array, dy: Float64Array): void => {
    dy[0] = -y[0];
  };
  const run = (more: object) => () => integrate({ rhs, start: [1], from: 0, to: 1, ...more });
  for (const more of [
    { to: Number.NaN },
    { to: Number.POSITIVE_INFINITY },
    { from: Number.NEGATIVE_INFINITY },
    { outputs: [Number.NaN] },
    { stops: [Number.NaN] },
    { relative: Number.NaN },
    { absolute: [-1] },
    { method: "bdf" },
    { maxSteps: Number.NaN },
  ])
    expect(run(more)).toThrow(RangeError);
});
