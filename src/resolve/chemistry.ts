import { namesIn } from "../expressions/ast.js";
import { compileLaw } from "../expressions/law.js";
import { scaleOf } from "../expressions/scale.js";
import type { Chemistry, Reaction, Species } from "../model/chemistry.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf, itemsOf, type MapNode, type Tree, textOf } from "../read/tree.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { findBases } from "./bases.js";
import { checkName } from "./check-name.js";
import { type ChemicalConstants, resolveConstants } from "./chemical-constants.js";
import { heatsHold, resolveMedium, withHeats } from "./heats.js";
import { massKept } from "./mass-kept.js";
import { explainRates } from "./rate-dimension.js";
import { ratesHold } from "./rate-values.js";
import { resolveReaction, type WrittenReaction } from "./reaction.js";
import { aboveZero } from "./sign.js";
import { bindValue, emptyScope, reportFault, resolveValue, type Scope } from "./value.js";
import { withTemperature } from "./warmed.js";

/**
 * Binds a chemistry: species and constants to slots, rate laws and their exact derivatives to closures, and finds in which
 * concentrations the laws are right.
 * @param tree a document that has passed the shape check
 * @returns undefined once an error is reported; warnings go to `report` beside a result
 */
export function resolveChemistry(tree: MapNode, path: string, report: Report): Chemistry | undefined {
  const declared = entriesOf(child(tree, "species"));
  const species = resolveSpecies(child(tree, "species"), report);
  const names = declared.map((e) => e.key.text);
  const named = { constants: child(tree, "constants"), parameters: child(tree, "parameters") };
  const constants = resolveConstants(named, names.length, new Set(names), report);
  const scope = scopeOf(names, constants);
  const declaredConstants = Object.values(named).flatMap((node) => entriesOf(node).map((e) => e.key.text));
  const nodes = itemsOf(child(tree, "reactions"));
  const written = nodes.flatMap((node) => {
    const one = resolveReaction(node, names, declaredConstants, scope, report);
    return one && namesFound(one, scope, constants.whole, report) && scalesFit(one, scope, report) ? [one] : [];
  });
  if (!constants.whole || written.length < nodes.length || species.length < declared.length) return undefined;

  const warm = constants.constants.filter((c) => c.warmed).map((c) => c.name);
  const heatCapacity = resolveMedium(child(tree, "medium"), report);
  if (!heatsHold(written, warm, report) || heatCapacity === "faulty") return undefined;
  const laws = written.map(({ rate, makes }) => ({ rate, changes: makes.map((m) => m.species) }));
  const others = (name: string): Dimension | undefined => scope.dimension(name);
  const ways = findBases(names, laws, others);
  if (ways.length === 0) {
    explainRates(names, written, others, report);
    return undefined;
  }
  const bases = withHeats(ways, written, report);
  if (bases.length === 0) return undefined;
  unusedNames(species, constants, written, report);
  const temperatureSlot = names.length + constants.constants.length;
  const uses = [
    ...written.flatMap((w) => [...namesIn(w.rate), ...w.mentions]),
    ...constants.constants.flatMap((c) => c.value.uses),
  ];
  const title = child(tree, "chemistry");
  const chemistry: Chemistry = {
    title: textOf(tree, "chemistry") ?? "",
    at: title?.at ?? tree.at,
    path,
    species,
    constants: constants.constants,
    order: constants.order,
    temperatureSlot,
    needsTemperature: uses.includes("T"),
    makesFollowTemperature: written.some(({ makesOf }) => makesOf.some((name) => name === "T" || warm.includes(name))),
    heatCapacity,
    reactions: written.map((w) => bindReaction(w, names, constants.constants, warm, (name) => scope.slot(name))),
    bases,
  };
  massKept(chemistry, report);
  const places = written.map((w) => w.rateNode.at);
  return ratesHold(chemistry, places, report) ? chemistry : undefined;
}

function resolveSpecies(node: Tree | undefined, report: Report): Species[] {
  return entriesOf(node).flatMap(({ key, value }): Species[] => {
    if (!checkName(key, report)) return [];
    if (key.text === "temperature") {
      report("name-taken", key.at, { name: key.text, by: "what a feed's temperature is called" });
      return [];
    }
    const written = child(value, "molar-mass");
    const molarMass = written && resolveValue(written, dimensions["molar mass"], emptyScope, report);
    if (written && !(molarMass && aboveZero(`the molar mass of '${key.text}'`, molarMass, false, report))) return [];
    return [{ name: key.text, at: key.at, molarMass }];
  });
}

/** Slots of an Env: species, constants, temperature. Dimensions of all but the species, which are still open. */
function scopeOf(species: readonly string[], { constants, dimensions: found }: ChemicalConstants): Scope {
  const slots = new Map([...species, ...constants.map((c) => c.name), "T"].map((name, i) => [name, i]));
  return {
    slot: (name) => slots.get(name),
    dimension: (name) => (name === "T" ? dimensions.temperature : found.get(name)),
    names: () => [...slots.keys()],
    scale: (name) => (name === "T" ? "point" : constants.find((c) => c.name === name)?.value.scale),
  };
}

/** Reports names in a law that nothing has; where constants failed already, their names are no news. */
function namesFound(w: WrittenReaction, scope: Scope, whole: boolean, report: Report): boolean {
  if (namesIn(w.rate).every((name) => scope.slot(name) !== undefined)) return true;
  if (whole) bindValue(w.rateNode, { expression: w.rate }, "any", scope, report);
  return false;
}

/** Dimensions are looked at once all laws are known; what a law does with temperatures can be told at once. */
function scalesFit({ rate, rateNode }: WrittenReaction, scope: Scope, report: Report): boolean {
  const scale = scaleOf(rate, scope);
  if (typeof scale !== "string") reportFault(rateNode, scale, report);
  return typeof scale === "string";
}

function bindReaction(
  w: WrittenReaction,
  species: readonly string[],
  constants: ChemicalConstants["constants"],
  warm: readonly string[],
  slotOf: (name: string) => number | undefined,
): Reaction {
  const { value, write, gradient, record } = compileLaw(w.rate, species, slotOf);
  return {
    text: w.text,
    at: w.at,
    counts: w.counts,
    makes: w.makes,
    rate: value,
    writeRate: write,
    gradient,
    record,
    warmed: withTemperature(w.rate, warm, constants, slotOf),
    heat: w.heat,
  };
}

function unusedNames(
  species: readonly Species[],
  { constants }: ChemicalConstants,
  written: readonly WrittenReaction[],
  report: Report,
): void {
  const named = [
    ...written.flatMap((w) => [...namesIn(w.rate), ...w.mentions]),
    ...constants.flatMap((c) => c.value.uses),
  ];
  const used = new Set(named);
  for (const { name, at } of species) if (!used.has(name)) report("unused-name", at, { name, role: "species" });
  for (const { name, at, free } of constants)
    if (!used.has(name)) report("unused-name", at, { name, role: free ? "parameter" : "constant" });
}
