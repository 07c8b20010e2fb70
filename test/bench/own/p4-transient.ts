import { writeFileSync } from "node:fs";
import { join } from "node:path";
import { compile, parseChemistry, parseDuty, parseNetwork, transient } from "../../../src/index.js";
import { readNamed } from "../named-table.js";
import { wanted, warmed } from "./load.js";

const chemistry = `chemistry: Fast and slow
format: 1
species: {A: {}, B: {}, C: {}, D: {}}
constants: {forward: 1e6 1/min, back: 2.5e5 1/min, second: 0.8 L/mol/min}
reactions:
  - {equation: A <-> B, rate: mass-action, constant: [forward, back]}
  - {equation: B + C -> D, rate: mass-action, constant: [second]}
`;
const duty = `duty: Start-up
format: 1
chemistry: chemistry.yaml
feeds: {feed: {A: 1 mol/L, C: 0.7 mol/L}}
`;

/** The same case through the library's `transient`, a network file and a chemistry: folder, file for the outlet. */
export function p4Transient([folder, out]: string[]): Record<string, unknown> {
  const volumes = readNamed(join(folder, "volumes.csv"));
  const streams = readNamed(join(folder, "flows.csv")).map(([from, to, q]) => ({ from, to, q: Number(q) }));
  const flowsOf = (name: string): string => {
    const own = streams.filter((s) => s.from === name);
    const whole = own.reduce((sum, s) => sum + s.q, 0);
    const shares = own.slice(1).map((s) => `${s.to}: ${(100 * s.q) / whole} %`);
    return own.length === 1 ? own[0].to : `{${[...shares, `${own[0].to}: rest`].join(", ")}}`;
  };
  const feed = streams.filter((s) => s.from === "feed").reduce((sum, s) => sum + s.q, 0);
  const names = new Set(volumes.map(([name]) => name));
  const outlets = [...new Set(streams.map((s) => s.to).filter((name) => !names.has(name)))];
  const network = `network: Twelve tanks
format: 1
feeds: {feed: {flow: ${feed} L/min, to: ${flowsOf("feed")}}}
compartments:
${volumes.map(([name, v]) => `  ${name}: {kind: stirred, volume: ${v} L, to: ${flowsOf(name)}}\n`).join("")}outlets: [${outlets.join(", ")}]
`;
  const document = wanted(parseNetwork(network, { path: "tanks.yaml" }));
  const { plant } = compile(document);
  if (!plant) throw new Error("no plant");
  const asked = wanted(parseDuty(duty, { path: "duty.yaml", read: () => chemistry }));
  wanted(parseChemistry(chemistry, { path: "chemistry.yaml" }));
  const times = Float64Array.from({ length: 200 }, (_, k) => 60 * 4000 * (k / 199) ** 3);
  const run = () =>
    transient(plant, asked.chemistry, asked, times, { at: [], relative: 1e-6, absolute: 1e-10, balance: false });
  const { first, best, result } = warmed(run, 150, 20);
  const [{ values }] = result.outlets;
  let text = "t_min,A,B,C,D\n";
  times.forEach((t, k) => {
    text += `${[t / 60, ...values.subarray(4 * k, 4 * k + 4).map((c) => c / 1000)].join(",")}\n`;
  });
  writeFileSync(out, text);
  return { first_s: first, solve_s: best, steps: result.steps };
}
