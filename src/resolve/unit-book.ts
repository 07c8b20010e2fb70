import type { UnitBook } from "../model/network.js";
import type { Value } from "../model/value.js";
import { type Basis, inBasis } from "../units/basis.js";
import { siUnit } from "../units/describe.js";
import { dimensionKey, dimensions } from "../units/dimension.js";
import { parseUnit } from "../units/parse.js";
import type { Unit } from "../units/unit.js";

const known = (text: string): Unit => {
  const unit = parseUnit(text);
  if (!("factor" in unit)) throw new Error(`no unit ${text}`);
  return unit;
};

/** What people expect where a file uses no unit of a dimension. */
const usual: Unit[] = ["%", "L", "L/min", "g", "g/L", "mol/L", "mol", "min", "1/min", "K", "kJ/mol"].map(known);

const usualByMass: Unit[] = ["kg", "kg/h", "mol/kg"].map(known);

/**
 * The units that a document uses, first come first kept, for printing results as the site writes them.
 * @param values in file order
 * @param basis  volumes and flows count mass with `mass`
 * @param flow   the value whose unit tells the unit of time (the first feed's flow)
 */
export function unitBook(
  values: readonly (Pick<Value, "unit"> | undefined)[],
  flow: Value | undefined,
  basis: Basis = "volume",
): UnitBook {
  const book = new Map<string, Unit>();
  for (const v of values) {
    // A bare number tells nothing of how shares are to be written.
    if (v?.unit && v.unit.name !== "" && !book.has(dimensionKey(v.unit.dimension)))
      book.set(dimensionKey(v.unit.dimension), v.unit);
  }
  const flowUnit = flow?.unit ?? book.get(dimensionKey(inBasis(dimensions.flow, basis)));
  const time = timeOf(flowUnit) ?? book.get(dimensionKey(dimensions.time)) ?? known("min");
  for (const unit of [time, ...(basis === "mass" ? usualByMass : []), ...usual]) {
    if (!book.has(dimensionKey(unit.dimension))) book.set(dimensionKey(unit.dimension), unit);
  }
  return {
    time,
    // By mass what is asked as a volume is a hold-up.
    unitFor: (asked) => {
      const dimension = inBasis(asked as Unit["dimension"], basis);
      return book.get(dimensionKey(dimension)) ?? { name: siUnit(dimension), factor: 1, offset: 0, dimension };
    },
  };
}

/** The time in a flow unit: min of L/min, d of MGD. */
function timeOf(flow: Unit | undefined): Unit | undefined {
  if (!flow) return undefined;
  const after = flow.name.split("/").at(-1);
  const unit = after && after !== flow.name ? parseUnit(after) : undefined;
  if (unit && "factor" in unit && dimensionKey(unit.dimension) === dimensionKey(dimensions.time)) return unit;
  return /gpm/i.test(flow.name) ? known("min") : /d$/i.test(flow.name) ? known("d") : undefined;
}
