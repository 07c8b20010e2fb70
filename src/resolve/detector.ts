import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, type ScalarNode, type Tree, textOf } from "../read/tree.js";
import { isUnitFault, parseUnit } from "../units/parse.js";
import { signalUnit, type Unit } from "../units/unit.js";
import { emptyScope, resolveUnit, resolveValue } from "./value.js";

/** The unit under a key. Where `anyWord`, a word that is no unit is the detector's own. Undefined: not there, or reported. */
export function resolveDetectorUnit(
  map: Tree | undefined,
  key: string,
  anyWord: boolean,
  report: Report,
): Unit | undefined {
  const text = textOf(map, key)?.trim();
  if (anyWord && text !== undefined && isUnitFault(parseUnit(text))) return signalUnit(text);
  return resolveUnit(child(map, key), "any", report);
}

/** A value in any unit; where `anyWord`, also in a detector's own: `1500 mV`, `3 squirts ± 2 %`. */
export function resolveDetectorValue(node: Tree | undefined, anyWord: boolean, report: Report): Value | undefined {
  const own = anyWord && node?.type === "scalar" ? ownValue(node) : undefined;
  return own ?? resolveValue(node, "any", emptyScope, report);
}

function ownValue(node: ScalarNode): Value | undefined {
  const found = /^([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?) (\S+)(?:\s*(?:±|\+\/-)\s*(\d+\.?\d*) %)?$/.exec(
    node.text.trim(),
  );
  if (!found || !isUnitFault(parseUnit(found[2]))) return undefined;
  const unit = signalUnit(found[2]);
  const number = Number(found[1]);
  const sd = found[3] === undefined ? undefined : (Math.abs(number) * Number(found[3])) / 100;
  return {
    at: node.at,
    dimension: unit.dimension,
    unit,
    expression: { type: "number", value: number, unit, at: { from: 0, to: found[1].length } },
    uses: [],
    of: () => number,
    sd: sd === undefined ? undefined : () => sd,
  };
}
