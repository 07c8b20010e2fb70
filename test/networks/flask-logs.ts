import { readFileSync } from "node:fs";
import { compile } from "../../src/compile/compile.js";
import { modelOf } from "../../src/fit/model-of.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { uniformSource } from "../simulate/seeded.js";

/** What the flask and the vessel "really" are, SI. Invented (demo); the study has to find it. */
export const truth = { k30: 0.115e-3, activation: 47e3, corner: 0.11, renewal: 4e-3 / 60 };

const folder = "networks/flask";
const text = (file: string) => readFileSync(`${folder}/${file}`, "utf8");

interface Log {
  readonly trial: string;
  readonly column: string;
  /** min */
  readonly times: readonly number[];
  /** mol/L or g/L */
  readonly spread: number;
  readonly digits: number;
  readonly seed: number;
}

const every = (count: number, step: number, first = 0): number[] =>
  Array.from({ length: count }, (_, i) => Math.round(1000 * (first + i * step)) / 1000);

export const logs: readonly Log[] = [
  { trial: "flask-20", column: "base", times: every(14, 2), spread: 4e-4, digits: 5, seed: 2024 },
  { trial: "flask-40", column: "base", times: every(12, 0.75), spread: 4e-4, digits: 5, seed: 2025 },
  { trial: "salt", column: "salt", times: every(60, 1, 0.5), spread: 6e-3, digits: 4, seed: 2026 },
];

/** The log of a trial as it would have been written down: the truth with noise. */
export function flaskLog({ trial: name, column, times, spread, digits, seed }: Log): string {
  const rows = (values: readonly string[]) => `t,${column}\n${times.map((t, i) => `${t},${values[i]}`).join("\n")}\n`;
  const blank = rows(times.map(() => "0"));
  const values = truly(trialWith(`${name}.yaml`, (file) => (file.endsWith(".csv") ? blank : undefined)));
  const normal = normals(seed);
  return rows(values.map((c) => (c / 1000 / (column === "salt" ? 1e-3 : 1) + spread * normal()).toFixed(digits)));
}

/** The three titrations of the outlet, mol/L. */
export function titrations(): string[] {
  const normal = normals(2027);
  return truly(trialWith("outlet.yaml")).map((c) => (c / 1000 + 6e-4 * normal()).toFixed(4));
}

function trialWith(file: string, made: (path: string) => string | undefined = () => undefined): Trial {
  const read = (path: string) => made(path) ?? readFileSync(path, "utf8");
  const { document, problems } = parseTrial(text(file), { path: `${folder}/${file}`, read });
  if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
  return document;
}

function truly(trial: Trial): number[] {
  const network = parseNetwork(text("corner.yaml"), { path: `${folder}/corner.yaml` }).document as Network;
  const { model } = modelOf(network, [trial]);
  const wanted = trial.readings.map((r) => r.series ?? { time: new Float64Array(0) });
  const curves = compile(network).plant && model.respond(trial, truth, wanted);
  if (!curves) throw new Error("the demo gives no curve");
  return curves.flatMap((c) => [...c]);
}

function normals(seed: number): () => number {
  const random = uniformSource(seed);
  return () => Math.sqrt(-2 * Math.log(random())) * Math.cos(2 * Math.PI * random());
}
