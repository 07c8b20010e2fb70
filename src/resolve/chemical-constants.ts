import type { Expression } from "../expressions/ast.js";
import { knownConstants, namesIn } from "../expressions/ast.js";
import { call, difference, number, product, quotient } from "../expressions/build.js";
import type { ChemicalConstant } from "../model/chemistry.js";
import type { Env, Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { collector } from "../problems/report.js";
import { child, type Entry, entriesOf, type Tree } from "../read/tree.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { checkName } from "./check-name.js";
import { dependencyOrder } from "./dependency-order.js";
import { resolveTemperature, resolveValue, type Scope, writtenValue } from "./value.js";

/** R, J/(mol K). */
const gasConstant = knownConstants.get("gas-constant")?.value ?? Number.NaN;

export interface ChemicalConstants {
  readonly constants: readonly ChemicalConstant[];
  /** Indices into `constants`, each after those that it needs. */
  readonly order: readonly number[];
  /** Dimension by name, of those that are in order. */
  readonly dimensions: ReadonlyMap<string, Dimension>;
  /** True where all could be read. */
  readonly whole: boolean;
}

/**
 * The constants of a chemistry; they may use one another in any order, and `T`.
 * @param firstSlot slot of the first constant in an Env; the temperature comes after the last
 * @param taken names that species have
 */
export function resolveConstants(
  node: Tree | undefined,
  firstSlot: number,
  taken: ReadonlySet<string>,
  report: Report,
): ChemicalConstants {
  const written = entriesOf(node);
  const entries = written.filter((e) => nameIsFree(e, taken, report));
  const index = new Map(entries.map((e, i) => [e.key.text, i]));
  const temperatureSlot = firstSlot + entries.length;
  const found = new Map<string, Dimension>();
  const values: (Value | undefined)[] = entries.map(() => undefined);
  const scope: Scope = {
    slot: (name) => (name === "T" ? temperatureSlot : at(index.get(name), firstSlot)),
    dimension: (name) => (name === "T" ? dimensions.temperature : found.get(name)),
    names: () => [...index.keys(), "T"],
    scale: (name) => (name === "T" ? "point" : values[index.get(name) ?? -1]?.scale),
  };
  const order: number[] = [];
  const needed = entries.map(({ value }) => needs(value).flatMap((name) => index.get(name) ?? []));
  const { order: possible, circles } = dependencyOrder(needed);
  for (const circle of circles) {
    report("circular-names", entries[circle[0]].key.at, { circle: circle.map((i) => entries[i].key.text) });
  }
  for (const i of possible) {
    const resolved = resolveConstant(entries[i], scope, temperatureSlot, report);
    if (!resolved) continue;
    values[i] = resolved;
    found.set(entries[i].key.text, resolved.dimension);
    order.push(i);
  }
  const whole = order.length === written.length;
  const constants = entries.flatMap(({ key }, i) => {
    const value = values[i];
    return value ? [{ name: key.text, at: key.at, value }] : [];
  });
  return { constants, order: whole ? order : [], dimensions: found, whole };
}

const at = (i: number | undefined, shift: number): number | undefined => (i === undefined ? undefined : i + shift);

function nameIsFree({ key }: Entry, taken: ReadonlySet<string>, report: Report): boolean {
  if (!checkName(key, report)) return false;
  if (!taken.has(key.text)) return true;
  report("name-taken", key.at, { name: key.text, by: "a species" });
  return false;
}

/** Names that a constant is made of; its own problems are told when it is resolved. */
function needs(node: Tree): readonly string[] {
  const parts = node.type === "map" ? ["value", "at", "activation"].map((key) => child(node, key)) : [node];
  const silent = collector().report;
  return parts.flatMap((part) => {
    const written = part && writtenValue(part, silent);
    return written ? namesIn(written.expression) : [];
  });
}

function resolveConstant(
  { key, value: node }: Entry,
  scope: Scope,
  temperature: number,
  report: Report,
): Value | undefined {
  if (node.type !== "map") return resolveValue(node, "any", scope, report);
  const value = resolveValue(child(node, "value"), "any", scope, report);
  const [atNode, activationNode] = [child(node, "at"), child(node, "activation")];
  if (!atNode && !activationNode) return value;
  if (!atNode || !activationNode) {
    const [has, lacks] = atNode ? ["at", "activation"] : ["activation", "at"];
    report("arrhenius-half", key.at, { name: key.text, has, lacks });
    return undefined;
  }
  const reference = resolveTemperature(atNode, scope, report);
  const activation = resolveValue(activationNode, dimensions["molar energy"], scope, report);
  return value && reference && activation && arrhenius(value, reference, activation, temperature);
}

/**
 * k(T) = k(T0) exp(E/R (1/T0 - 1/T)).
 * @see S. Arrhenius, Z. phys. Chem. 4 (1889) 226-248
 */
function arrhenius(value: Value, reference: Value, activation: Value, temperature: number): Value {
  const inverse = (e: Expression): Expression => quotient(number(1), e);
  const T: Expression = { type: "name", name: "T", at: { from: 0, to: 0 } };
  const ratio = quotient(activation.expression, number(gasConstant));
  const exponent = product(ratio, difference(inverse(reference.expression), inverse(T)));
  const overR = (env: Env): number => (1 / reference.of(env) - 1 / env[temperature]) / gasConstant;
  const of = (env: Env): number => value.of(env) * Math.exp(activation.of(env) * overR(env));
  const spread = (env: Env): number => {
    const ofValue = (value.sd?.(env) ?? 0) * Math.exp(activation.of(env) * overR(env));
    const ofActivation = (activation.sd?.(env) ?? 0) * of(env) * overR(env);
    return Math.hypot(ofValue, ofActivation);
  };
  return {
    at: value.at,
    dimension: value.dimension,
    unit: value.unit,
    expression: product(value.expression, call("exp", exponent)),
    uses: [...new Set([...value.uses, ...reference.uses, ...activation.uses, "T"])],
    of,
    sd: value.sd || activation.sd ? spread : undefined,
  };
}
