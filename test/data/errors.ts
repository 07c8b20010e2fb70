import { type MomentsOptions, readMoments } from "../../src/data/moments.js";
import type { ReadingMoments } from "../../src/data/result.js";
import { random } from "../../src/numerics/random.js";
import { trialOf } from "./helpers.js";

/** A test whose truth is known: how it is read, and what its figures are. Times in min. */
export interface Truth {
  /** The reading at a time since the injection, without noise, g/L. */
  readonly curve: (t: number) => number;
  readonly clock: readonly number[];
  readonly change?: Parameters<typeof trialOf>[1];
  readonly options?: MomentsOptions;
  /** SI. */
  readonly figures: Readonly<Record<string, number>>;
}

/** Noise of a log: standard deviation, g/L, and the correlation of neighbours. */
export interface Scatter {
  readonly sd: number;
  readonly lag1?: number;
}

/** What repeated logs of one truth give. */
export interface Repeated {
  /** By figure: how often 1.96 standard errors hold the truth, %; root mean square and mean of the distance in standard errors. */
  readonly holds: Readonly<Record<string, { share: number; rms: number; mean: number; told: number }>>;
  /** By finding: in how many of 100 logs. */
  readonly codes: Readonly<Record<string, number>>;
}

/** Reads so many noisy logs of a truth. */
export function repeated(
  { curve, clock, change, options, figures }: Truth,
  scatter: Scatter,
  runs: number,
  seed: number,
): Repeated {
  const { normal } = random(seed);
  const { sd, lag1 = 0 } = scatter;
  const distances: Record<string, number[]> = {};
  const codes: Record<string, number> = {};
  for (let run = 0; run < runs; run++) {
    let e = sd * normal();
    const points = clock.map((t): [number, number] => {
      const now: [number, number] = [t, curve(t) + e];
      e = lag1 * e + sd * Math.sqrt(1 - lag1 * lag1) * normal();
      return now;
    });
    const { document, problems } = trialOf(points, change);
    if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
    const result = readMoments(document, options);
    for (const { code } of result.findings) codes[code] = (codes[code] ?? 0) + 100 / runs;
    for (const [name, truth] of Object.entries(figures)) {
      const found = figureOf(result.readings[0], name);
      if (found?.value === undefined || found.standardError === undefined) continue;
      distances[name] = [...(distances[name] ?? []), (found.value - truth) / found.standardError];
    }
  }
  const holds = Object.fromEntries(
    Object.entries(distances).map(([name, z]) => [
      name,
      {
        share: (100 * z.filter((x) => Math.abs(x) <= 1.96).length) / z.length,
        rms: Math.sqrt(z.reduce((s, x) => s + x * x, 0) / z.length),
        mean: z.reduce((s, x) => s + x, 0) / z.length,
        told: z.length,
      },
    ]),
  );
  return { holds, codes };
}

function figureOf(reading: ReadingMoments, name: string): { value?: number; standardError?: number } | undefined {
  const found = reading.indices[name] ?? (reading as unknown as Record<string, unknown>)[name];
  return found as { value?: number; standardError?: number } | undefined;
}

/** Equal steps, both ends. */
export const every = (step: number, from: number, to: number): number[] =>
  Array.from({ length: Math.round((to - from) / step) + 1 }, (_, i) => Number((from + i * step).toFixed(9)));

/** Two stirred tanks of 40 and 70 L at 10 L/min: E in 1/min, F, and its figures in SI. */
const [a, b] = [10 / 40, 10 / 70];
export const pair = {
  E: (t: number) => (t > 0 ? ((a * b) / (a - b)) * (Math.exp(-b * t) - Math.exp(-a * t)) : 0),
  F: (t: number) => (t > 0 ? 1 - (a * Math.exp(-b * t) - b * Math.exp(-a * t)) / (a - b) : 0),
  figures: (): Record<string, number> => ({
    mean: 60 * 11,
    variance: 3600 * 65,
    skewness: (2 * (4 ** 3 + 7 ** 3)) / 65 ** 1.5,
    ...Object.fromEntries([10, 16, 50, 84, 90].map((p) => [`t${p}`, 60 * inverse((t) => pair.F(t), p / 100, 300)])),
  }),
};

/** Where a rising function meets a level, by halving. */
export function inverse(f: (t: number) => number, level: number, until: number): number {
  let [low, high] = [0, until];
  for (let k = 0; k < 80; k++) {
    const middle = (low + high) / 2;
    if (f(middle) < level) low = middle;
    else high = middle;
  }
  return high;
}
