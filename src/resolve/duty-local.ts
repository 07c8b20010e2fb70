import type { Chemistry } from "../model/chemistry.js";
import type { LocalDuty, Placed } from "../model/duty.js";
import type { Report } from "../problems/report.js";
import { entriesOf, type Tree } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import { emptyScope, resolveValue } from "./value.js";

/** Constants that hold in some places only, by place. */
export function resolveLocal(
  node: Tree | undefined,
  chemistry: Chemistry | undefined,
  report: Report,
): Map<string, LocalDuty> {
  const dimension = new Map(chemistry?.constants.map((c) => [c.name, c.value.dimension]));
  const known = [...dimension.keys()];
  const places = entriesOf(node).map(({ key: place, value: inner }): [string, LocalDuty] => {
    const constants = entriesOf(inner).flatMap(({ key, value }): [string, Placed][] => {
      const wanted = dimension.get(key.text);
      if (!wanted) {
        const near = nearest(key.text, known);
        report("unknown-place", key.at, { name: key.text, nearest: near, wanted: "constant of the chemistry", known });
        return [];
      }
      const resolved = resolveValue(value, wanted, emptyScope, report);
      return resolved ? [[key.text, { at: key.at, value: resolved }]] : [];
    });
    return [place.text, { at: place.at, constants: new Map(constants) }];
  });
  return new Map(places);
}
