import { describe, expect, test } from "vitest";
import { type Complex, complex } from "../../src/numerics/complex.js";
import { invert, type Transforms, type Wanted } from "../../src/numerics/inversion.js";

const { of, add, subtract, divide, scale, exp, sqrt, log1p } = complex;
const one = of(1);

/** First passage with drift, G = e^((1-a) Pe/2) / a, a = sqrt(1 + 4 s/Pe): Levenspiel & Smith (1957). */
const open = (pe: number) => ({
  transform(s: Complex): Complex {
    const a = sqrt(add(one, scale(s, 4 / pe)));
    return divide(exp(divide(scale(s, -2), add(one, a))), a);
  },
  curve: (t: number) => Math.exp((-((1 - t) ** 2) * pe) / (4 * t)) / Math.sqrt((4 * Math.PI * t) / pe),
});
const tank = { transform: (s: Complex) => divide(one, add(one, s)), curve: (t: number) => Math.exp(-t) };
const pairs = {
  "a pole": tank,
  "a branch point": {
    transform: (s: Complex) => exp(scale(log1p(s), -1.5)),
    curve: (t: number) => 2 * Math.sqrt(t / Math.PI) * Math.exp(-t),
  },
  "a wide peak": open(20),
  "a narrow peak": open(1e4),
  "a narrow peak and a slow tail": {
    transform: (s: Complex) => scale(add(tank.transform(s), open(1e4).transform(s)), 0.5),
    curve: (t: number) => 0.5 * (tank.curve(t) + open(1e4).curve(t)),
  },
};
const alone = (transform: (s: Complex) => Complex): Transforms => ({
  count: 1,
  at(sRe, sIm, re, im) {
    const v = transform({ re: sRe, im: sIm });
    re[0] = v.re;
    im[0] = v.im;
  },
});
const wanted = (times: Float64Array, power: 0 | 1 = 0): Wanted => ({
  transform: 0,
  power,
  times,
  scale: 0.1,
  group: power,
});
const times = Float64Array.from({ length: 240 }, (_, i) => 10 ** (-9 + i / 20));

describe.each(Object.entries(pairs))("%s", (_, { transform, curve }) => {
  test("is found again at all times at once, to 1e-11 of its peak", () => {
    const { values, settled, difference } = invert(alone(transform), [wanted(times)], 1);
    const peak = Math.max(...times.map(curve));
    times.forEach((t, i) => {
      expect(Math.abs(values[0][i] - curve(t))).toBeLessThan(1e-11 * peak);
    });
    expect(settled).toBe(true);
    expect(difference).toBeLessThan(1e-10);
  });

  test("a value does not depend on the other times, nor on the unit of the windows", () => {
    const all = invert(alone(transform), [wanted(times)], 1).values[0];
    const few = invert(alone(transform), [wanted(Float64Array.of(times[180], times[187]))], 1).values[0];
    const other = invert(alone(transform), [wanted(times)], 3.3).values[0];
    expect(Math.abs(few[0] - all[180])).toBeLessThan(1e-9);
    expect(Math.abs(few[1] - all[187])).toBeLessThan(1e-9);
    times.forEach((_, i) => {
      expect(Math.abs(other[i] - all[i])).toBeLessThan(1e-9);
    });
  });
});

test("a power of s is an integral over time", () => {
  const { values } = invert(alone(tank.transform), [wanted(times, 1)], 1);
  times.forEach((t, i) => {
    expect(Math.abs(values[0][i] + Math.expm1(-t))).toBeLessThan(1e-12);
  });
});

test("a transform of zeros is zero", () => {
  const { values, settled } = invert(
    alone(() => of(0)),
    [wanted(times)],
    1,
  );
  expect(values[0].every((v) => v === 0)).toBe(true);
  expect(settled).toBe(true);
});

test("a jump in the midst of the curve does not settle, and is not passed over in silence", () => {
  const jump = (s: Complex) => divide(exp(scale(s, -1)), s);
  const { settled, difference } = invert(alone(jump), [wanted(Float64Array.of(1.0001, 1.2, 1.5))], 1, 2000);
  expect(settled).toBe(false);
  expect(difference).toBeGreaterThan(1e-10);
});

test("resonances beyond the first nodes are looked for where there may be some", () => {
  // a tank of 0.01 and a delay of 1 in a circle of 99 %: it rings once a pass, far above the nodes of a late window
  const share = 0.99;
  const pass = (s: Complex) => divide(exp(scale(s, -1)), add(one, scale(s, 0.01)));
  const transforms: Transforms = {
    ...alone((s) => divide(scale(pass(s), 1 - share), subtract(one, scale(pass(s), share)))),
    bound(damping, sIm, sizes) {
      const g = Math.exp(damping) / Math.hypot(1 - 0.01 * damping, 0.01 * sIm);
      sizes[0] = ((1 - share) * g) / (1 - share * g);
      return share * g < 1;
    },
  };
  // Erlang (1917): after n passes the n tanks give a gamma density
  const curve = (t: number) => {
    let sum = 0;
    let log = 0; // ln (n-1)!
    for (let n = 1; n < t; n++) {
      if (n > 1) log += Math.log(n - 1);
      const u = (t - n) / 0.01;
      sum += (1 - share) * share ** (n - 1) * 100 * Math.exp((n - 1) * Math.log(u) - u - log);
    }
    return sum;
  };
  const late = Float64Array.from({ length: 30 }, (_, i) => 40.4 + i * 1.01);
  const scaled = { ...wanted(late), scale: 0.01 };
  const { values, settled } = invert(transforms, [scaled], 100, 100_000);
  expect(settled).toBe(true);
  late.forEach((t, i) => {
    expect(Math.abs(values[0][i] - curve(t))).toBeLessThan(1e-9);
  });
});
