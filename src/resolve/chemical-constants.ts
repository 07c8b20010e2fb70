import type { Expression } from "../expressions/ast.js";
import { knownConstants, namesIn } from "../expressions/ast.js";
import { call, difference, number, product, quotient } from "../expressions/build.js";
import type { ChemicalConstant, Freedom } from "../model/chemistry.js";
import type { Env, Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { collector } from "../problems/report.js";
import { child, type Entry, entriesOf, type Tree, textOf } from "../read/tree.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import { one } from "../units/unit.js";
import { checkName } from "./check-name.js";
import { dependencyOrder } from "./dependency-order.js";
import { emptyScope, resolveTemperature, resolveValue, type Scope, writtenValue } from "./value.js";
import { warmedConstants } from "./warmed.js";

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
 * The constants and parameters of a chemistry; they may use one another in any order, and `T`.
 * @param firstSlot slot of the first constant in an Env; parameters come after the constants, then the temperature
 * @param taken names that species have
 */
export function resolveConstants(
  { constants: node, parameters: freeNode }: { constants: Tree | undefined; parameters: Tree | undefined },
  firstSlot: number,
  taken: ReadonlySet<string>,
  report: Report,
): ChemicalConstants {
  const free = entriesOf(freeNode);
  const written = [...entriesOf(node), ...free];
  const byConstants = new Set(entriesOf(node).map((e) => e.key.text));
  const entries = written.filter(
    (e) =>
      nameIsFree(e, taken, "a species", report) &&
      (!free.includes(e) || nameIsFree(e, byConstants, "a constant", report)),
  );
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
  const constants = entries.flatMap((entry, i): ChemicalConstant[] => {
    const [value, { key }] = [values[i], entry];
    if (!value) return [];
    const freedom = free.includes(entry) ? freedomOf(entry, value, report) : undefined;
    return [{ name: key.text, at: key.at, value, ...(freedom ? { free: freedom } : {}) }];
  });
  const warm = whole ? warmedConstants(constants, order, (name) => scope.slot(name)) : [];
  const known = constants.map((c, i) => ({ ...c, warmed: warm[i] }));
  return { constants: known, order: whole ? order : [], dimensions: found, whole };
}

const at = (i: number | undefined, shift: number): number | undefined => (i === undefined ? undefined : i + shift);

function nameIsFree({ key }: Entry, taken: ReadonlySet<string>, by: string, report: Report): boolean {
  if (!checkName(key, report)) return false;
  if (!taken.has(key.text)) return true;
  report("name-taken", key.at, { name: key.text, by });
  return false;
}

/** What a fit may do with a parameter; bounds are numbers, in order, with the start value between them. */
function freedomOf({ key, value: node }: Entry, value: Value, report: Report): Freedom {
  const spacing = textOf(node, "spacing") === "log" ? "log" : "linear";
  const written = child(node, "between");
  const ends =
    written?.type === "list"
      ? written.items.map((item) => resolveValue(item, value.dimension, emptyScope, report))
      : [];
  const [low, high] = ends;
  const between = low && high ? ([low, high] as const) : undefined;
  if (between && value.uses.length === 0) boundsHold(key.text, value, between, spacing, report);
  return { between, spacing, about: textOf(node, "about") };
}

function boundsHold(
  name: string,
  value: Value,
  between: readonly [Value, Value],
  spacing: Freedom["spacing"],
  report: Report,
): void {
  const [low, high, start] = [...between, value].map((v) => v.of([]));
  const text = (x: number): string => formatQuantity(x, value.unit ?? one);
  const said = { name, low: text(low), high: text(high) };
  if (!(low < high)) report("bounds-reversed", between[0].at, said);
  else if (start < low || start > high) report("start-outside-bounds", value.at, { ...said, value: text(start) });
  else if (spacing === "log" && low <= 0) report("log-bounds", between[0].at, { name });
}

/** Names that a constant is made of; its own problems are told when it is resolved. */
function needs(node: Tree): readonly string[] {
  const parts = node.type === "map" ? ["value", "at", "activation", "heat"].map((key) => child(node, key)) : [node];
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
  // Arrhenius's law for a rate and van 't Hoff's for an equilibrium are one formula, in E and in the heat of reaction.
  const [atNode, heatNode] = [child(node, "at"), child(node, "heat")];
  const activationNode = child(node, "activation") ?? heatNode;
  if (!atNode && !activationNode) return value;
  if (heatNode && activationNode !== heatNode) {
    report("not-here", heatNode.at, {
      says: `constant '${key.text}' has both \`activation\` and \`heat\`, which say the same of a rate and of an equilibrium`,
      fix: "keep `activation` for a rate constant, `heat` for an equilibrium constant",
    });
    return undefined;
  }
  if (!atNode || !activationNode) {
    const energy = heatNode ? "heat" : "activation";
    const [has, lacks] = atNode ? ["at", energy] : [energy, "at"];
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
