import { expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import { random } from "../../src/numerics/random.js";
import { networkOf, trialOf } from "./load.js";

const network = (parameters: string, body: string) =>
  networkOf(
    `network: tanks\nformat: 1\nparameters: {${parameters}}\nfeeds: {feed: {flow: 10 L/min, to: a}}\ncompartments: {a: {${body}, to: out}}\noutlets: [out]\n`,
  );
const volume = "V: {value: 60 L, between: [10 L, 300 L]}";
const cascade = network(`${volume}, n: {value: 2, between: [1, 10]}`, "kind: cascade, volume: V, tanks: n");
const tank = network(volume, "kind: stirred, volume: V");

/** One tank of 100 L, read from the moment of the pulse on, where a cascade of more than one tank has nothing yet. */
function pulse(seed: number) {
  const draw = random(seed);
  const rows = Array.from({ length: 81 }, (_, t) => {
    const c = 0.5 * Math.exp(-t / 10);
    return `${t},${c + (0.004 + 0.02 * c) * draw.normal()}`;
  });
  return trialOf(
    "trial: pulse\nformat: 1\ninjection: {at: feed, pulse: 50 g}\nreadings: [{at: out, file: d.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]\n",
    () => `t,c\n${rows.join("\n")}\n`,
  );
}

test.each([1, 2, 3, 4])(
  "a model does not end worse than the one that is nested in it, where its density jumps at a bound: %i",
  (seed) => {
    const trial = pulse(seed);
    const richer = fit(cascade, [trial]).fit;
    const nested = fit(tank, [trial]).fit;
    expect(nested?.converged).toBe(true);
    expect(richer?.residualSumOfSquares).toBeLessThan((nested?.residualSumOfSquares ?? 0) * (1 + 1e-6));
  },
);
