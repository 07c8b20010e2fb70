import type { Network } from "../model/network.js";
import type { ChangeDocument, Rival } from "../model/study.js";
import { networkFromTree } from "../parse/network.js";
import { collector, hasErrors } from "../problems/report.js";
import { mergeTree } from "../read/merge.js";
import { checkShape } from "../read/shape.js";
import { child, entriesOf, type MapNode } from "../read/tree.js";

/** A rival with a change laid over it, or the reason why it cannot be. */
export type Changed =
  | {
      readonly network: Network /** Names that the change sets: their fitted values no longer count. */;
      readonly sets: ReadonlySet<string>;
    }
  | { readonly skipped: string };

/** Applies a change to a rival. What names something that the rival lacks is skipped, with the reason in words. */
export function applyChange(rival: Rival, change: ChangeDocument): Changed {
  const lacking = lacks(rival.tree, change.change);
  if (lacking) return { skipped: `it changes ${lacking}, which this network does not have` };
  const missing: string[] = [];
  const merged = mergeTree(rival.tree, change.change, (key) => missing.push(key.text));
  if (missing.length > 0) return { skipped: `it removes '${missing[0]}', which this network does not have` };
  const shape = collector();
  if (!checkShape(merged, "network", shape.report)) return { skipped: shape.problems[0].message };
  const { network, problems } = networkFromTree(merged, rival.path, rival.files);
  if (!network || hasErrors(problems)) {
    const first = problems.find((p) => p.severity === "error");
    return { skipped: first ? first.message : "the changed network is not complete" };
  }
  const sets = new Set(
    ["parameters", "constants"].flatMap((key) => entriesOf(child(change.change, key)).map((e) => e.key.text)),
  );
  for (const { key, value } of entriesOf(child(change.change, "feeds"))) {
    if (child(value, "flow")) sets.add(`${key.text}.flow`);
  }
  return { network, sets };
}

/** The first thing that a change alters but a network lacks; what a change adds whole is no lack. */
function lacks(base: MapNode, change: MapNode): string | undefined {
  for (const key of ["parameters", "constants", "feeds", "compartments"] as const) {
    for (const { key: name, value } of entriesOf(child(change, key))) {
      const whole = key === "compartments" ? child(value, "kind") : key === "feeds" ? child(value, "flow") : undefined;
      const needed = key === "parameters" ? !child(value, "between") : key === "constants" ? false : !whole;
      if (needed && !child(child(base, key), name.text)) return `${noun[key]} '${name.text}'`;
    }
  }
  return undefined;
}

const noun = {
  parameters: "the parameter",
  constants: "the constant",
  feeds: "the feed",
  compartments: "the compartment",
} as const;
