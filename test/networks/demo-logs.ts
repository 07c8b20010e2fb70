import { readFileSync } from "node:fs";
import { compile } from "../../src/compile/compile.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { trialResponse } from "../../src/simulate/trial.js";
import { uniformSource } from "../simulate/seeded.js";

/** What the demo vessel "really" is. Invented (demo); the study has to find it from the logs. */
export const truth = { bypass: 0.09, riser: 0.18, quiet: 0.52, renewal: 3.5e-3 / 60 };

interface Log {
  readonly trial: string;
  readonly flow: number;
  readonly seed: number;
  /** s on the clock of the day. */
  readonly from: number;
  readonly every: number;
  readonly count: number;
  /** Rows during which air sat in the cell. */
  readonly air: readonly [number, number] | undefined;
}

export const logs: readonly Log[] = [
  { trial: "salt-normal", flow: 40, seed: 20240612, from: 9 * 3600, every: 30, count: 781, air: [423, 432] },
  { trial: "salt-half", flow: 20, seed: 20240614, from: 7 * 3600 + 50 * 60, every: 60, count: 781, air: undefined },
];

const folder = "networks/demo";
const text = (name: string) => readFileSync(`${folder}/${name}.yaml`, "utf8");

/** The log of one demo trial as the plant's recorder would have written it: drift, noise, 1 uS/cm of resolution. */
export function demoLog(log: Log): string {
  const network = parseNetwork(text("both"), { path: `${folder}/both.yaml` }).document;
  // The trial is read with a table of the right times, so that its own clock and sample line are used.
  const times = Array.from({ length: log.count }, (_, i) => log.from + i * log.every);
  const table = csv(
    times,
    times.map(() => "0.2"),
  );
  const trial = parseTrial(text(log.trial), { path: `${folder}/${log.trial}.yaml`, read: () => table }).document;
  if (!network || !trial) throw new Error("the demo does not parse");
  const { plant } = compile(network, { ...truth, "feed.flow": log.flow / 6e4 });
  if (!plant) throw new Error("the demo does not compile");
  const series = trial.readings[0].series;
  if (!series) throw new Error("no series");
  const [c] = trialResponse(plant, trial, [series]);
  const random = uniformSource(log.seed);
  const values = times.map((time, i) => {
    const normal = Math.sqrt(-2 * Math.log(random())) * Math.cos(2 * Math.PI * random());
    const hours = (time - log.from) / 3600;
    const air = log.air && i >= log.air[0] && i <= log.air[1] ? -0.17 : 0;
    const conductivity = 0.21 + 1.9 * c[i] + 0.006 + 0.0011 * hours + 0.0045 * normal + air;
    return conductivity.toFixed(3);
  });
  return csv(times, values);
}

/** The samples of the README's tour: three blanks and 40 grab samples of a 10 L tank with a quiet corner of 2.6 L (demo). */
export function tourSamples(): string {
  const folder = "networks/tour";
  const text = (name: string) => readFileSync(`${folder}/${name}.yaml`, "utf8");
  const after = Array.from({ length: 40 }, (_, i) => Math.round(10 * (0.1 + 89.9 * (i / 39) ** 1.7)) / 10);
  const minutes = [-3, -2, -1, ...after];
  const table = (values: readonly string[]) =>
    `t,salt\nmin,g/L\n${minutes.map((t, i) => `${t},${values[i]}`).join("\n")}\n`;
  const network = parseNetwork(text("corner"), { path: `${folder}/corner.yaml` }).document;
  const trial = parseTrial(text("salt"), {
    path: `${folder}/salt.yaml`,
    read: () => table(minutes.map(() => "0.1")),
  }).document;
  const series = trial?.readings[0].series;
  const plant = network && compile(network, { quiet: 2.6e-3, renewal: 0.09e-3 / 60 }).plant;
  if (!plant || !trial || !series) throw new Error("the tour does not parse");
  const [c] = trialResponse(plant, trial, [series]);
  const random = uniformSource(42);
  return table(
    Array.from(c, (x) => {
      const normal = Math.sqrt(-2 * Math.log(random())) * Math.cos(2 * Math.PI * random());
      return (x + 0.004 + 0.003 * normal).toFixed(4);
    }),
  );
}

function csv(times: readonly number[], values: readonly string[]): string {
  const clock = (s: number) =>
    [Math.floor(s / 3600), Math.floor(s / 60) % 60, s % 60].map((x) => String(x).padStart(2, "0")).join(":");
  return `Time,Cond [mS/cm]\n${times.map((t, i) => `${clock(t)},${values[i]}`).join("\n")}\n`;
}
