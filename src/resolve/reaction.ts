import type { Expression } from "../expressions/ast.js";
import { difference, number, power, product } from "../expressions/build.js";
import { isFault } from "../expressions/fault.js";
import { parseExpression } from "../expressions/parse.js";
import type { Made } from "../model/chemistry.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf, itemsOf, type MapNode, type ScalarNode, type Tree } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { dimensions } from "../units/dimension.js";
import { type Equation, parseEquation, type Term } from "./equation.js";
import { spanWithin } from "./span.js";
import { reportFault, resolveValue, type Scope } from "./value.js";

/** A reaction with its rate as an expression, dimensions not yet looked at. */
export interface WrittenReaction {
  readonly text: string;
  readonly at: Span;
  readonly counts: "molecules" | "as written";
  readonly makes: readonly Made[];
  /** Names of constants that stand in `makes`. */
  readonly makesOf: readonly string[];
  /** Every name outside the rate law: the species of the equation, what stands in `makes`. */
  readonly mentions: readonly string[];
  readonly rate: Expression;
  /** The scalar that the rate stands in: its law, or the name of its mass-action constant. */
  readonly rateNode: ScalarNode;
  readonly rateText: string;
  /** Heat of reaction, J per unit of it. */
  readonly heat: Value | undefined;
}

/** Reads one reaction. Undefined once its problems are reported. */
export function resolveReaction(
  node: Tree,
  species: readonly string[],
  constants: readonly string[],
  scope: Scope,
  report: Report,
): WrittenReaction | undefined {
  const [equationNode, makesNode] = [child(node, "equation"), child(node, "makes")];
  const equation = equationNode?.type === "scalar" ? parseEquation(equationNode, report) : undefined;
  const written = equationNode ?? makesNode;
  if (!written || (equationNode && !equation)) return undefined;
  const text = written.type === "scalar" ? written.text : sourceText(written.at);
  const sides =
    equation && equationNode?.type === "scalar"
      ? fromEquation(equation, equationNode, species, report)
      : fromMakes(makesNode, species, scope, report);
  const rate = resolveRate(node, text, equation, constants, report);
  const heatNode = child(node, "heat");
  const heat = heatNode && resolveValue(heatNode, heatDimensions, scope, report);
  if (!sides || !rate || (heatNode && !heat)) return undefined;
  if (sides.makes.length === 0) {
    report("nothing-happens", written.at, { text });
    return undefined;
  }
  return {
    text,
    at: written.at,
    counts: equation ? "molecules" : "as written",
    ...sides,
    mentions: [...sides.mentions, ...(heat?.uses ?? [])],
    ...rate,
    heat,
  };
}

const heatDimensions = [dimensions["molar energy"], dimensions["energy per mass"]];

const sourceText = ({ source, from, to }: Span): string => source.text.slice(from, to).replace(/\s+/g, " ").trim();

type Sides = Pick<WrittenReaction, "makes" | "makesOf" | "mentions">;

/** Right minus left; a species on both sides (a catalyst) changes by the difference. */
function fromEquation(
  { left, right }: Equation,
  node: ScalarNode,
  species: readonly string[],
  report: Report,
): Sides | undefined {
  const net = new Float64Array(species.length);
  const add = (term: Term, sign: number): boolean => {
    const at = spanWithin(node, term.from, term.to);
    const i = known(term.name, at, species, report);
    if (i >= 0) net[i] += sign * term.count;
    if (term.count === 0) report("zero-stoichiometry", at, { species: term.name });
    return i >= 0 && term.count > 0;
  };
  const good = [...left.map((term) => add(term, -1)), ...right.map((term) => add(term, 1))].every(Boolean);
  if (!good) return undefined;
  const makes = [...net].flatMap((count, i) => (count === 0 ? [] : [{ species: i, number: () => count }]));
  return { makes, makesOf: [], mentions: [...left, ...right].map((term) => term.name) };
}

function fromMakes(
  node: Tree | undefined,
  species: readonly string[],
  scope: Scope,
  report: Report,
): Sides | undefined {
  const [mentions, makesOf]: [string[], string[]] = [[], []];
  const made = entriesOf(node).map(({ key, value }): Made | undefined => {
    const i = known(key.text, key.at, species, report);
    const resolved = resolveValue(value, dimensions.ratio, scope, report);
    if (i < 0 || !resolved) return undefined;
    mentions.push(key.text, ...resolved.uses);
    makesOf.push(...resolved.uses);
    if (resolved.uses.length === 0 && resolved.of([]) === 0) {
      report("zero-stoichiometry", value.at, { species: key.text });
      return undefined;
    }
    return { species: i, number: (env) => resolved.of(env) };
  });
  const good = made.filter((m) => m !== undefined);
  return good.length === made.length ? { makes: good, makesOf, mentions } : undefined;
}

function known(name: string, at: Span, species: readonly string[], report: Report): number {
  const i = species.indexOf(name);
  if (i < 0) report("unknown-place", at, { name, nearest: nearest(name, species), wanted: "species", known: species });
  return i;
}

type Rate = Pick<WrittenReaction, "rate" | "rateNode" | "rateText">;

function resolveRate(
  node: Tree,
  text: string,
  equation: Equation | undefined,
  constants: readonly string[],
  report: Report,
): Rate | undefined {
  const rateNode = child(node, "rate");
  const constantNode = child(node, "constant");
  if (rateNode?.type !== "scalar") return undefined; // the shape check has said so
  if (rateNode.text === "mass-action") {
    if (child(node, "equation") && !equation) return undefined;
    return massAction(node as MapNode, rateNode, text, equation, constants, report);
  }
  if (constantNode) {
    report("constant-without-mass-action", constantNode.at, {});
    return undefined;
  }
  const rate = parseExpression(rateNode.text);
  if (isFault(rate)) return reportFault(rateNode, rate, report);
  return { rate, rateNode, rateText: rateNode.text };
}

/**
 * Forward rate k times the product of the left side, less the same of the right side where it goes both ways.
 * @see C.M. Guldberg, P. Waage, J. prakt. Chem. 19 (1879) 69-114
 */
function massAction(
  node: MapNode,
  rateNode: ScalarNode,
  text: string,
  equation: Equation | undefined,
  constants: readonly string[],
  report: Report,
): Rate | undefined {
  if (!equation) {
    report("mass-action-makes", rateNode.at, {});
    return undefined;
  }
  const names = itemsOf(child(node, "constant")).filter((item) => item.type === "scalar");
  const wanted = equation.reversible ? 2 : 1;
  if (names.length !== wanted) {
    report("mass-action-constants", child(node, "constant")?.at ?? rateNode.at, { text, wanted, got: names.length });
    return undefined;
  }
  const missing = names.filter(({ text: name, at }) => {
    if (constants.includes(name)) return false;
    report("unknown-place", at, { name, nearest: nearest(name, constants), wanted: "constant", known: constants });
    return true;
  });
  if (missing.length > 0) return undefined;
  const way = (constant: ScalarNode, terms: readonly Term[]): Expression =>
    terms.reduce((rate, term) => product(rate, power(named(term.name), number(term.count))), named(constant.text));
  const forward = way(names[0], equation.left);
  const rate = equation.reversible ? difference(forward, way(names[1], equation.right)) : forward;
  return { rate, rateNode: names[0], rateText: "mass action" };
}

const named = (name: string): Expression => ({ type: "name", name, at: { from: 0, to: 0 } });
