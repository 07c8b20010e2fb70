import { knownConstants } from "../expressions/ast.js";
import { functions } from "../expressions/functions.js";
import { reservedNames } from "../expressions/reserved.js";
import { exampleFor, nameDimension, siUnit } from "../units/describe.js";
import { type Dimension, dimensionKey, dimensions } from "../units/dimension.js";
import { otherSpellings, unitRows } from "../units/table.js";
import { code, parts, table } from "./markdown.js";

/** Ways to write a value, each of which is read by a test. */
export const valueExamples: readonly { readonly text: string; readonly says: string }[] = [
  { text: "10 L/min", says: "a number, one space, a unit" },
  { text: "1.2e-3 mol/L", says: "powers of ten" },
  { text: "15 %", says: "a share; so is `0.15`" },
  { text: "35 degC", says: "a temperature; a difference of temperatures is written in K" },
  { text: "40 W/(m2 K)", says: "brackets in a unit, and only there a space" },
  { text: "1000 L ± 20 L", says: "a standard deviation of 20 L" },
  { text: "1000 L +/- 2 %", says: "one of 2 % of the value, that is 20 L" },
  { text: "10 % ± 2 %", says: "in the value's own unit it is absolute: 8 to 12 %" },
  { text: "total - riser", says: "an expression over names; a minus has spaces around it" },
  { text: "0.15 * feed.flow", says: "`feed.flow` is the flow of the feed named `feed`" },
  { text: "2 * (pi / 4 * 1.2 m^2) * 3 m", says: "`+ - * / ^` and brackets" },
];

/** How values, units and expressions are written. */
export function valuesSection(): string {
  const calls = Object.entries(functions).map(([name, f]) => [code(name), f.says ?? "", code(f.example ?? "")]);
  const constants = [...knownConstants].map(([name, c]) => [code(name), `${c.value} ${siUnit(c.dimension)}`.trim()]);
  return parts(
    "A value is a number with a unit, or an expression over the names of `constants:` and `parameters:`, and over `feed.flow`, the flow of a feed. " +
      "Every key has a dimension; a unit of another one is refused, and so is a number with no unit where one is wanted. A bare number is a pure number.",
    table(
      ["value", ""],
      valueExamples.map(({ text, says }) => [code(text), says]),
    ),
    "`±` (or `+/-`) states what is known of a measured fact: one standard deviation. It is carried into every interval that depends on the value.",
    "### Functions",
    table(["function", "gives", "for example"], calls),
    "### Known constants and reserved names",
    table(["name", "value"], constants),
    `These words mean something already, so nothing can be named so: ${[...reservedNames].map(code).join(", ")}. ` +
      "Names are letters, digits, hyphens and underscores, and begin with a letter. A hyphen inside a word belongs to the name.",
    "### Units",
    "Units are joined by `/` and `·` or `*`, with exponents (`m3`, `m^2`, `s^-1`): `mol/L/min`, `kg/h`, `1/min`. Division takes one factor at a time, from the left. " +
      "Prefixes stand before a unit without a space: `mL`, `kJ`, `ug` (or `µg`). `gal`, `qt`, `pt` and `floz` are US liquid measures, `impgal` and `galUK` the imperial gallon. A temperature in `degC` or `degF` is a point on a scale: to it one adds a difference, in `K`. A unit that is not in the table is refused, with the one that was probably meant.",
    unitTable(),
    `Other spellings are asked back, never taken silently: ${spellings()}.`,
    "### Dimensions",
    table(
      ["dimension", "for example"],
      Object.entries(dimensions).map(([, d]) => [nameDimension(d).replace(/^an? /, ""), code(exampleFor(d))]),
    ),
  );
}

function unitTable(): string {
  const byDimension = new Map<string, { dimension: Dimension; units: string[] }>();
  for (const [names, prefixes, , , dimension] of unitRows) {
    const key = dimensionKey(dimension);
    const row = byDimension.get(key) ?? { dimension, units: [] };
    byDimension.set(key, row);
    const before = prefixes === "" ? "" : ` (${prefixes.split(" ").join(", ")})`;
    row.units.push(...names.split(" ").map((name) => `${code(name)}${before}`));
    if (names === "K") row.units.push(code("degC"), code("degF"));
  }
  return table(
    ["of", "units (and their prefixes)"],
    [...byDimension.values()].map(({ dimension, units }) => [
      nameDimension(dimension).replace(/^an? /, ""),
      units.join(", "),
    ]),
  );
}

const spellings = (): string =>
  ["lpm", "cfm", "cc", "hr", "liter", "gallon"]
    .map((word) => `${code(word)} for ${code(otherSpellings.get(word) ?? "")}`)
    .join(", ");
