import type { Report } from "../problems/report.js";
import { lineText, placeOf } from "../text/source.js";
import type { Entry, MapNode, Tree } from "./tree.js";

/** YAML's own traps: text that is valid YAML and does not say what its author meant. */
export function reportTraps(tree: Tree, report: Report): void {
  if (tree.type === "list") for (const item of tree.items) reportTraps(item, report);
  if (tree.type !== "map") return;
  const braces = isFlow(tree);
  for (const [i, entry] of tree.entries.entries()) {
    if (braces) reportLoneKey(tree, entry, tree.entries[i - 1], report);
    reportTraps(entry.value, report);
  }
}

const isFlow = (map: MapNode): boolean => map.at.source.text[map.at.from] === "{";

/** A key with no colon after it, inside braces: `{b:1 L}`, or the tail of a value that a comma cut. */
function reportLoneKey(map: MapNode, entry: Entry, before: Entry | undefined, report: Report): void {
  const { key, value } = entry;
  if (!key.plain || value.type !== "scalar" || !value.empty || value.text !== "" || hasColon(map, entry)) return;
  const glued = /^([A-Za-z][\w-]*):(\S.*)$/s.exec(key.text);
  if (glued) {
    const corrected = correctedLine(entry, key.at.from, key.at.to, `${glued[1]}: ${glued[2]}`);
    report("colon-without-space", key.at, { key: key.text, corrected });
    return;
  }
  if (!before || before.value.type !== "scalar" || !before.value.plain || before.value.empty) return;
  const text = map.at.source.text.slice(before.value.at.from, key.at.to);
  const decimal = /\d$/.test(before.value.text) && /^\d/.test(key.text);
  const call = count(before.value.text, "(") > count(before.value.text, ")");
  if (!decimal && !call) return;
  const better = call ? `"${text}"` : text.replace(/\s*,\s*/, ".");
  const at = { source: map.at.source, from: before.value.at.from, to: key.at.to };
  report("comma-in-braces", at, { text, corrected: correctedLine(entry, at.from, at.to, better) });
}

function hasColon(map: MapNode, { key }: Entry): boolean {
  return /^\s*:/.test(map.at.source.text.slice(key.at.to, map.at.to));
}

/** The line of the entry with a stretch of it replaced. */
function correctedLine({ key }: Entry, from: number, to: number, by: string): string {
  const { source } = key.at;
  const { line, column, endLine, endColumn } = placeOf({ source, from, to });
  const text = lineText(source, line);
  return `${text.slice(0, column - 1)}${by}${line === endLine ? text.slice(endColumn - 1) : ""}`.trim();
}

const count = (text: string, letter: string): number => text.split(letter).length - 1;
