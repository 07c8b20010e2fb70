import type { Network } from "../model/network.js";
import { collector } from "../problems/report.js";
import type { ScalarNode } from "../read/tree.js";
import { emptyScope, resolveValue } from "../resolve/value.js";
import { countsOf, isCount } from "../study/counts.js";
import type { Input } from "../study/inputs.js";
import { type Axis, spaced } from "../study/sweep.js";
import { nearest } from "../text/nearest.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import { UsageError } from "./usage.js";

/** What stands between two ends on a command line: SI, in a unit to print in. */
export interface Range {
  readonly from: number;
  readonly to: number;
  readonly unit: Unit;
  readonly count: number | undefined;
  readonly log: boolean;
}

const usualCount = 11;
const mostPoints = 10_000;
const form = /^(.+?)\s*\.\.\s*(.+?)(?:\s*:\s*(\d+))?(\s+log)?$/;

/**
 * An axis of `--over "name=500 L..2000 L:16"`; ` log` at the end spaces the values in equal ratios.
 * @throws UsageError where the name is unknown or the range makes no sense
 */
export function axisFrom(text: string, inputs: readonly Input[]): Axis {
  const option = `--over '${text}'`;
  const equals = text.indexOf("=");
  if (equals < 0) throw new UsageError(`${option}: write it like --over "name=500 L..2000 L:16"`);
  const input = inputNamed(text.slice(0, equals).trim(), inputs, "--over");
  const { from, to, count: asked, log } = rangeFrom(text.slice(equals + 1).trim(), input, option);
  const whole = isCount(input);
  if (whole && !(Number.isInteger(from) && Number.isInteger(to)))
    throw new UsageError(`${option}: '${input.name}' moves in whole steps`);
  const count = asked ?? (whole ? Math.min(to - from + 1, usualCount) : usualCount);
  if (count < 2 || count > mostPoints) throw new UsageError(`${option}: 2 to ${mostPoints} points make a sweep`);
  const values = spaced(from, to, count, log);
  return { input, values: whole ? [...new Set(values.map(Math.round))] : values, log };
}

/**
 * A number of tanks moves in whole steps, each of them another vessel: only a sweep goes through these.
 * @throws UsageError where the name is of one
 */
export function requireNoCount(name: string, network: Network, option: string): void {
  if (!countsOf({ network }).some((c) => c.name === name)) return;
  const change = option === "--set" ? "write another number in the file, or sweep it" : "sweep it";
  throw new UsageError(
    `${option}: '${name}' moves in whole steps, each of them another vessel; ${change}: backmix sweep with --over "${name}=1..8"`,
  );
}

/** @throws UsageError where there is no such input */
export function inputNamed(name: string, inputs: readonly Input[], option: string): Input {
  const input = inputs.find((i) => i.name === name);
  if (input) return input;
  const names = inputs.map((i) => i.name);
  const near = nearest(name, names);
  if (/(^|\.)temperature$/.test(name)) {
    const where = name === "temperature" ? "a duty" : "a feed of a duty with `heat:`";
    throw new UsageError(
      `${option}: there is no '${name}'; ${where} has one where it says \`temperature:\`: write the present one there; there are ${names.join(", ")}`,
    );
  }
  throw new UsageError(
    `${option}: there is no '${name}'; ${near ? `did you mean '${near}'?` : `there are ${names.join(", ")}`}`,
  );
}

/**
 * `500 L..2000 L`, with `:16` for the points and ` log` for equal ratios. A unit may stand at the upper end alone.
 * @param input undefined in its dimension: `500 L` where a temperature is wanted is an error
 * @throws UsageError
 */
export function rangeFrom(text: string, input: Input, option: string): Range {
  const found = form.exec(text);
  if (!found) throw new UsageError(`${option}: write two ends, like "500 L..2000 L"`);
  const [, low, high, count, log] = found;
  const upper = value(high, input, option);
  const lower = value(
    /^[-+−]?[\d.]+([eE][-+]?\d+)?$/.test(low) && upper.unit.name !== "" ? `${low} ${upper.unit.name}` : low,
    input,
    option,
  );
  const [from, to] = [lower.si, upper.si];
  if (!(from < to)) throw new UsageError(`${option}: the lower end comes first, and is below the other`);
  const { limits } = input;
  if (limits && (from < limits[0] || to > limits[1])) {
    const [low, high] = limits.map((v) => formatQuantity(v, input.unit));
    throw new UsageError(`${option}: '${input.name}' lies between ${low} and ${high}`);
  }
  const equal = log !== undefined;
  if (equal && !(from > 0)) throw new UsageError(`${option}: equal ratios need a lower end above 0`);
  if (equal && sameDimension(input.dimension, dimensions.temperature)) {
    throw new UsageError(`${option}: a temperature has no equal ratios; leave out \`log\``);
  }
  return { from, to, unit: upper.unit, count: count === undefined ? undefined : Number(count), log: equal };
}

function value(text: string, input: Input, option: string): { si: number; unit: Unit } {
  const { report, problems } = collector();
  const at = { source: { path: option, text }, from: 0, to: text.length };
  const node: ScalarNode = { type: "scalar", at, text, plain: true, empty: text === "" };
  const found = resolveValue(node, input.dimension, emptyScope, report);
  if (!found) {
    const says = problems.map((p) => `${p.message}; ${p.fix}`).join("; ");
    throw new UsageError(`${option}: ${says}`);
  }
  return { si: found.of([]), unit: found.unit ?? input.unit };
}
