// Coverage: how often 95 % intervals hold the truth over many data sets of a vessel that is known. One process of several:
// `coverage.mjs VESSEL NOISE FIRST COUNT REFITS` prints one line of JSON.
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { bootstrapOf } from "../../../src/fit/bootstrap.js";
import { fit } from "../../../src/fit/fit.js";
import { refitsOf } from "../../../src/fit/resample.js";
import { type Method, noises, vessels } from "./cases.js";

const root = process.env.BACKMIX_ROOT ?? ".";
const [vesselIndex, noiseIndex, first, count, refits] = process.argv.slice(2).map(Number);
const vessel = vessels((path) => readFileSync(join(root, path), "utf8"))[vesselIndex];
const noise = noises[noiseIndex];

interface Tally {
  held: number;
  of: number;
  width: number;
}

const tallies: Record<string, Tally> = {};
const count1 = (method: Method, name: string, low: number | undefined, high: number | undefined): void => {
  const key = `${method} ${name}`;
  tallies[key] ??= { held: 0, of: 0, width: 0 };
  const tally = tallies[key];
  const [a, b] = [low ?? Number.NEGATIVE_INFINITY, high ?? Number.POSITIVE_INFINITY];
  tally.of++;
  if (a <= vessel.truth[name] && vessel.truth[name] <= b) tally.held++;
  tally.width += (b - a) / vessel.truth[name];
};

for (let k = first; k < first + count; k++) {
  const trial = vessel.trial(1000 * (noiseIndex + 1) + k, noise);
  const { fit: found } = fit(vessel.network, [trial], { starts: vessel.starts, profile: true });
  if (!found) continue;
  for (const name of vessel.asked) {
    const p = found.parameters.find((q) => q.name === name);
    const profile = found.profiles?.find((q) => q.name === name);
    if (vessel.methods.includes("linear")) count1("linear", name, p?.interval95?.[0], p?.interval95?.[1]);
    count1("profile", name, profile?.interval95[0], profile?.interval95[1]);
  }
  if (refits === 0) continue;
  const again = refitsOf(vessel.network, [trial], { values: found.values, seed: k + 1 });
  if (!again) continue;
  const rows = Array.from({ length: refits }, (_, r) => again.refit(r));
  const { parameters } = bootstrapOf(found, refits, again, rows);
  for (const name of vessel.asked) {
    const p = parameters.find((q) => q.name === name);
    count1("bootstrap", name, p?.interval95[0], p?.interval95[1]);
  }
}
console.log(JSON.stringify({ vessel: vesselIndex, noise: noiseIndex, tallies }));
