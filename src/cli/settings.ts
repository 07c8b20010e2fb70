import type { Settings } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { collector } from "../problems/report.js";
import type { ScalarNode } from "../read/tree.js";
import { emptyScope, resolveValue } from "../resolve/value.js";
import { inputsOf } from "../study/inputs.js";
import { nearest } from "../text/nearest.js";
import { UsageError } from "./outcome.js";

/**
 * The values of `--set name=value`, SI by name; a later one of the same name counts.
 * @param duty what stands beside the network: its names are told apart from unknown ones
 * @throws UsageError where a name is unknown or a value has the wrong dimension
 */
export function settingsFrom(network: Network, written: readonly string[] = [], duty?: Duty): Settings {
  const settable = network.names.filter((n) => n.role !== "inflow");
  const names = settable.map((n) => n.name);
  return Object.fromEntries(
    written.map((text) => {
      const equals = text.indexOf("=");
      const name = text.slice(0, equals).trim();
      const named = settable.find((n) => n.name === name);
      if (equals < 0) throw new UsageError(`'--set ${text}' has no value; write --set name=value`);
      const own = !named && duty ? inputsOf({ network, duty, values: {}, kinetics: new Map() }) : [];
      if (own.some((input) => input.name === name && input.of === "duty")) {
        throw new UsageError(
          `--set ${text}: '${name}' belongs to the duty '${duty?.title}', and --set moves the network alone; write it there, or move it with \`sweep --over\``,
        );
      }
      if (!named) throw new UsageError(`there is no '${name}' to set; ${suggest(name, names)}`);
      const { report, problems } = collector();
      const value = resolveValue(scalar(text, equals + 1), named.value.dimension, emptyScope, report);
      if (!value) throw new UsageError(`--set ${text}: ${problems.map((p) => `${p.message}; ${p.fix}`).join("; ")}`);
      return [name, value.of([])];
    }),
  );
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
