import { compile } from "../../src/compile/compile.js";
import { type MomentsOptions, readMoments } from "../../src/data/moments.js";
import type { Trial } from "../../src/model/trial.js";
import type { Random } from "../../src/numerics/random.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { trialResponse } from "../../src/simulate/trial.js";

/** A vessel of 100 L at 1 L/min, and what is true of its curve. */
export interface Known {
  readonly name: string;
  readonly network: string;
  readonly true: readonly string[];
}

const head = "network: Made for a test\nformat: 1\n";

export const vessels: readonly Known[] = [
  {
    name: "one stirred tank",
    network: `${head}feeds: {feed: {flow: 1 L/min, to: a}}\ncompartments: {a: {kind: stirred, volume: 100 L, to: product}}\noutlets: [product]\n`,
    true: ["well-mixed"],
  },
  {
    name: "three tanks in a row",
    network: `${head}feeds: {feed: {flow: 1 L/min, to: a}}\ncompartments: {a: {kind: stirred, volume: 100 L, repeat: 3, to: product}}\noutlets: [product]\n`,
    true: [],
  },
  {
    name: "forty tanks in a row",
    network: `${head}feeds: {feed: {flow: 1 L/min, to: a}}\ncompartments: {a: {kind: cascade, volume: 100 L, tanks: 40, to: product}}\noutlets: [product]\n`,
    true: ["near-plug"],
  },
  {
    name: "a tube of 30 %, then a tank",
    network: `${head}feeds: {feed: {flow: 1 L/min, to: leg}}\ncompartments: {leg: {kind: tubular, volume: 30 L, to: a}, a: {kind: stirred, volume: 70 L, to: product}}\noutlets: [product]\n`,
    true: ["tube-then-tank"],
  },
  {
    name: "15 % bypass by a small pipe, beside a tank",
    network: `${head}feeds: {feed: {flow: 1 L/min, to: {p: 15 %, a: rest}}}\ncompartments: {p: {kind: stirred, volume: 0.3 L, to: product}, a: {kind: stirred, volume: 99.7 L, to: product}}\noutlets: [product]\n`,
    true: ["bypass", "intensity-falls"],
  },
  {
    name: "8 % bypass ahead of three tanks",
    network: `${head}feeds: {feed: {flow: 1 L/min, to: {p: 8 %, a: rest}}}\ncompartments: {p: {kind: stirred, volume: 0.3 L, to: product}, a: {kind: stirred, volume: 99.7 L, repeat: 3, to: product}}\noutlets: [product]\n`,
    true: ["bypass"],
  },
  {
    name: "a tank with a quiet fifth, exchange 5 %",
    network: `${head}feeds: {feed: {flow: 1 L/min, to: a}}\ncompartments: {a: {kind: stirred, volume: 80 L, exchange: {q: 0.05 L/min}, to: product}, q: {kind: stirred, volume: 20 L}}\noutlets: [product]\n`,
    true: ["slow-exchange", "intensity-falls"],
  },
  {
    name: "two rows of tanks in parallel, 15 and 185 min",
    network: `${head}feeds: {feed: {flow: 1 L/min, to: {a: 50 %, b: rest}}}\ncompartments: {a: {kind: cascade, volume: 30 L, tanks: 20, to: product}, b: {kind: cascade, volume: 70 L, tanks: 20, to: product}}\noutlets: [product]\n`,
    true: ["parallel-paths", "intensity-falls"],
  },
  {
    name: "a loop: half goes round again",
    network: `${head}feeds: {feed: {flow: 1 L/min, to: a}}\ncompartments: {a: {kind: cascade, volume: 100 L, tanks: 60, to: {a: 50 %, product: rest}}}\noutlets: [product]\n`,
    true: ["loop", "intensity-falls"],
  },
];

const until = 900;
const step = 2;
const before = 20;
const clock = Float64Array.from({ length: before + until / step + 1 }, (_, i) => (i - before) * step);

/** The exact curve of a vessel after a pulse of 100 g, g/L at the clock's times. */
export function exactCurve({ network }: Known): Float64Array {
  const { plant } = compile(parseNetwork(network).document as never);
  const { document } = parseTrial(
    "trial: T\nformat: 1\ninjection: {at: feed, pulse: 100 g}\nreadings: [{at: product}]\n",
  );
  if (!plant) throw new Error("no plant");
  return trialResponse(plant, document as Trial, [{ time: clock.map((t) => 60 * t) }])[0];
}

/** What `moments` makes of a log. */
export function readLog(
  values: ArrayLike<number>,
  more = "",
  options: MomentsOptions = {},
  shown: Float64Array = clock,
) {
  const csv = `t,c\n${Array.from(shown, (t, i) => `${t},${values[i]}`).join("\n")}\n`;
  const text = `trial: T\nformat: 1\nflows: {feed: 1 L/min}\ninjection: {at: feed, pulse: 100 g}\nreadings: [{at: product, file: l.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}${more}}]\n`;
  const { document, problems } = parseTrial(text, { path: "t.yaml", read: () => csv });
  if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
  return { trial: document, result: readMoments(document, options) };
}

/** A curve with noise of a share of its peak. */
export function noisy(curve: Float64Array, share: number, noise: Random): Float64Array {
  const peak = curve.reduce((m, c) => Math.max(m, c), 0);
  return curve.map((c) => c + share * peak * noise.normal());
}

export { clock };
