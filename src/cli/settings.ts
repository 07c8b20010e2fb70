import type { Settings } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { collector } from "../problems/report.js";
import type { ScalarNode } from "../read/tree.js";
import { backwardsWith } from "../resolve/rate-values.js";
import { emptyScope, resolveValue } from "../resolve/value.js";
import { type Input, inputsOf } from "../study/inputs.js";
import { dutyWith } from "../study/set-duty.js";
import { nearest } from "../text/nearest.js";
import type { Dimension } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import { UsageError } from "./outcome.js";
import { requireNoCount } from "./ranges.js";

/**
 * The values of `--set name=value`, SI by name; a later one of the same name counts.
 * @throws UsageError where a name is unknown or a value has the wrong dimension
 */
export function settingsFrom(network: Network, written: readonly string[] = []): Settings {
  const settable = network.names.filter((n) => n.role !== "inflow");
  const names = settable.map((n) => n.name);
  return Object.fromEntries(
    written.map((text) => {
      const name = nameIn(text);
      const named = settable.find((n) => n.name === name);
      if (!named) requireNoCount(name, network, "--set");
      if (!named) throw new UsageError(`there is no '${name}' to set; ${suggest(name, names)}`);
      return [name, valueIn(text, named.value.dimension)];
    }),
  );
}

/**
 * The same beside a duty: names of the network give its settings, those of the duty another duty.
 * @throws UsageError
 */
export function settingsBeside(
  network: Network,
  written: readonly string[] = [],
  duty: Duty,
): { readonly set: Settings; readonly duty: Duty } {
  if (written.length === 0) return { set: {}, duty };
  const inputs = inputsOf({ network, duty, values: {}, kinetics: new Map() }).filter((i) => i.of === "duty");
  const own = new Map<string, number>();
  const rest = written.filter((text) => {
    const input = inputs.find((i) => i.name === nameIn(text));
    if (input) own.set(input.name, dutyValue(text, input, duty));
    return input === undefined;
  });
  const known = network.names.filter((n) => n.role !== "inflow").map((n) => n.name);
  for (const name of rest.map(nameIn)) {
    if (known.includes(name)) continue;
    requireNoCount(name, network, "--set");
    throw new UsageError(`there is no '${name}' to set; ${suggest(name, [...known, ...inputs.map((i) => i.name)])}`);
  }
  return { set: settingsFrom(network, rest), duty: dutyWith(duty, own) };
}

/** A value of a duty that makes sense there. */
function dutyValue(text: string, { name, dimension, unit, limits }: Input, { heat, chemistry }: Duty): number {
  const x = valueIn(text, dimension);
  const constant = chemistry?.constants.find((c) => c.name === name.slice(name.lastIndexOf(".") + 1));
  if (heat && constant?.warmed !== undefined && constant.name === name) {
    throw new UsageError(
      `--set ${text}: '${name}' follows the temperature, and heat balances need to know how: give it in the chemistry, or in one that is \`based-on\` it`,
    );
  }
  if (x < 0 && constant && chemistry) {
    const back = backwardsWith(chemistry, new Map([[constant.name, x]]));
    if (back) throw new UsageError(`--set ${text}: '${back.text}' would run backwards, negative at ${back.where}`);
  } else if (x < 0) throw new UsageError(`--set ${text}: it must be 0 or more`);
  if (limits && (x < limits[0] || x > limits[1])) {
    const [low, high] = limits.map((l) => formatQuantity(l, unit));
    throw new UsageError(`--set ${text}: '${name}' lies between ${low} and ${high}`);
  }
  return x;
}

function nameIn(text: string): string {
  const equals = text.indexOf("=");
  if (equals < 0) throw new UsageError(`'--set ${text}' has no value; write --set name=value`);
  return text.slice(0, equals).trim();
}

function valueIn(text: string, dimension: Dimension): number {
  const { report, problems } = collector();
  const value = resolveValue(scalar(text, text.indexOf("=") + 1), dimension, emptyScope, report);
  if (!value) throw new UsageError(`--set ${text}: ${problems.map((p) => `${p.message}; ${p.fix}`).join("; ")}`);
  return value.of([]);
}

/** A place that an option names must be one that flow passes. */
export function requirePlace(name: string, among: ReadonlyMap<string, number>, option: string): void {
  const names = [...among.keys()];
  if (!among.has(name)) throw new UsageError(`${option}: there is no place '${name}'; ${suggest(name, names)}`);
}

const suggest = (name: string, names: readonly string[]): string => {
  const near = nearest(name, names);
  return near ? `did you mean '${near}'?` : names.length > 0 ? `there are ${names.join(", ")}` : "the network has none";
};

function scalar(text: string, from: number): ScalarNode {
  const value = text.slice(from).trim();
  const start = text.indexOf(value, from);
  const at = { source: { path: "--set", text }, from: start, to: start + value.length };
  return { type: "scalar", at, text: value, plain: true, empty: value === "" };
}
