import { type MomentsOptions, type MomentsResult, readMoments } from "../../src/data/moments.js";
import { shapeCodes } from "../../src/data/shape-rules.js";
import { parseTrial } from "../../src/parse/trial.js";

/** A trial around a table: min and g/L, a pulse of 10 g at 10 L/min unless said otherwise. */
export function trialOf(
  points: readonly (readonly [number | string, number])[],
  {
    injection = "{at: feed, pulse: 10 g}",
    reading = "",
    flows = "{feed: 10 L/min}",
    time = "{column: t, unit: min}",
  } = {},
) {
  const text = [
    "trial: Made for a test",
    "format: 1",
    `flows: ${flows}`,
    `injection: ${injection}`,
    "readings:",
    "  - at: product",
    "    file: log.csv",
    `    time: ${time}`,
    "    value: {column: c, unit: g/L}",
    ...reading.split("\n").map((line) => `    ${line}`),
  ].join("\n");
  const csv = `t,c\n${points.map(([t, c]) => `${t},${c}`).join("\n")}`;
  return parseTrial(text, { path: "trial.yaml", read: (path) => (path === "log.csv" ? csv : undefined) });
}

/** The same, read without a model. */
export function readingOf(
  points: readonly (readonly [number | string, number])[],
  change: Parameters<typeof trialOf>[1] = {},
  options: MomentsOptions = {},
) {
  const { document, problems } = trialOf(points, change);
  if (!document) throw new Error(problems.map((p) => `${p.code}: ${p.message}`).join("\n"));
  const result = readMoments(document, options);
  return { ...result.readings[0], ...result, codes: codesOf(result) };
}

/** Codes of what a result says of the data; shapes that it sees have tests of their own. */
export function codesOf({ findings }: MomentsResult): string[] {
  return findings.map((f) => f.code).filter((code) => !shapeCodes.has(code));
}

/** Points of a function at equal steps from 0. */
export const sampled = (f: (t: number) => number, until: number, points: number): [number, number][] =>
  Array.from({ length: points + 1 }, (_, i) => [(until * i) / points, f((until * i) / points)]);

/** E of n equal stirred tanks with mean tau. */
export const tanks =
  (n: number, tau: number) =>
  (t: number): number => {
    const x = (n * t) / tau;
    let factorial = 1;
    for (let k = 2; k < n; k++) factorial *= k;
    return ((n / tau) * x ** (n - 1) * Math.exp(-x)) / factorial;
  };

/**
 * Outlet of a stirred tank of volume V that trades flow x with a quiet one of volume W, after a pulse of dose over V = 1
 * at t = 0: two exponentials, by the eigenvalues of the two balances.
 */
export const twoZones = (V: number, W: number, x: number, flow: number): ((t: number) => number) =>
  decays(V, W, x, flow, (weight) => weight);

/** What is still to come out of it, 1 - F: the integral of its E from t on. */
export const washoutOf = (V: number, W: number, x: number, flow: number): ((t: number) => number) =>
  decays(V, W, x, flow, (weight, rate) => ((flow / V) * weight) / -rate);

function decays(V: number, W: number, x: number, flow: number, height: (weight: number, rate: number) => number) {
  const [a, b, c, d] = [-(flow + x) / V, x / V, x / W, -x / W];
  const root = Math.sqrt(((a - d) / 2) ** 2 + b * c);
  const [slow, fast] = [(a + d) / 2 + root, (a + d) / 2 - root];
  const [heightSlow, heightFast] = [height((slow - d) / (slow - fast), slow), height((fast - d) / (fast - slow), fast)];
  return (t: number): number => heightSlow * Math.exp(slow * t) + heightFast * Math.exp(fast * t);
}
