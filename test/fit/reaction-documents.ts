import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import { networkOf, trialOf } from "./load.js";

/** A gas constant of the test's own, J/(mol K). */
const R = 8.314462618;

export const files: Record<string, string> = {
  "flask.yaml": "network: Flask\nformat: 1\ncompartments: {flask: {kind: stirred, volume: 1 L}}\n",
  "second.yaml": `chemistry: Second order
format: 1
species: {A: {molar-mass: 88 g/mol}, B: {}, P: {}}
parameters:
  k25: {value: 1 L/mol/min, between: [0.01 L/mol/min, 100 L/mol/min], spacing: log}
  E: {value: 40 kJ/mol, between: [10 kJ/mol, 120 kJ/mol]}
constants: {k: {at: 25 degC, value: k25, activation: E}}
reactions: [{equation: A + B -> P, rate: mass-action, constant: k}]
`,
  "first.yaml": `chemistry: First order
format: 1
species: {A: {}, P: {}}
parameters: {k: {value: 0.2 1/min, between: [0.001 1/min, 10 1/min], spacing: log}}
reactions: [{equation: A -> P, rate: mass-action, constant: k}]
`,
};

export const tank = (parameters = "{bypass: {value: 10 %, between: [0 %, 60 %]}}"): Network =>
  networkOf(`network: Tank with a bypass
format: 1
parameters: ${parameters}
constants: {total: 100 L}
feeds: {feed: {flow: 10 L/min, to: {tank: rest, out: bypass}}}
compartments: {tank: {kind: stirred, volume: total, to: out}}
outlets: [out]
`);

export const flask = (): Network => networkOf(files["flask.yaml"], "flask.yaml");

/** A + B -> P in a flask: A at a time in min, k in L/mol/min at 25 degC, E in kJ/mol, 1 and 1.2 mol/L at the start. */
export function left(t: number, kelvin: number, k25: number, activation: number): number {
  const [a, b] = [1, 1.2];
  const k = k25 * Math.exp(((activation * 1000) / R) * (1 / 298.15 - 1 / kelvin));
  return (a * (b - a)) / (b * Math.exp(k * t * (b - a)) - a);
}

export const table = (t: readonly number[], of: (t: number) => number): string =>
  `t,c\n${t.map((x) => `${x},${of(x)}`).join("\n")}\n`;

export const trial = (text: string, more: Record<string, string> = {}): Trial =>
  trialOf(text, (path) => more[path] ?? files[path]);

/** A flask at so many degC, with the readings of a table. */
export const flaskTrial = (celsius: number, data: string, contents = "{A: 1 mol/L, B: 1.2 mol/L}"): Trial =>
  trial(
    `trial: Flask at ${celsius} degC
format: 1
chemistry: second.yaml
vessel: flask.yaml
temperature: ${celsius} degC
contents: {flask: ${contents}}
readings: [{at: flask, of: A, file: data.csv, time: {column: t, unit: min}, value: {column: c, unit: mol/L}}]
`,
    { "data.csv": data },
  );

export const steadyTrial = (analyses: string, feed = "{A: 1 mol/L}", more = ""): Trial =>
  trial(`trial: Settled
format: 1
chemistry: first.yaml
feeds: {feed: ${feed}}
${more}steady: ${analyses}
`);
