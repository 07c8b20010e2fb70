import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { mergeTree } from "../read/merge.js";
import { checkShape } from "../read/shape.js";
import { child, type Entry, type MapNode, textOf } from "../read/tree.js";
import type { DocumentKind } from "../schema/shape.js";
import { nearest } from "../text/nearest.js";
import { openNamed } from "./named-file.js";

/**
 * A document as it stands, or, where it is `based-on` another one, that one with the `change` laid over it. Bases may be
 * variants themselves. Every node keeps the file and place where it was written.
 * @param tree a document that has passed the shape check
 * @returns undefined where the variant cannot be made or is no sound document; reported
 */
export function wholeDocument(tree: MapNode, kind: DocumentKind, files: Files, report: Report): MapNode | undefined {
  const named = child(tree, "based-on");
  const change = child(tree, "change");
  if (named?.type !== "scalar" || !change) return tree;
  const opened = openNamed(named, "base", files, report);
  if (!opened || !checkShape(opened, kind, report)) return undefined;
  if (child(opened, "change") && !child(opened, "based-on")) {
    report("change-only", openedKey(opened), { title: textOf(opened, kind) ?? "" });
    return undefined;
  }
  const base = wholeDocument(opened, kind, files, report);
  if (!base) return undefined;
  let clear = true;
  const merged = mergeTree(base, change, (key, known) => {
    clear = false;
    report("nothing-to-remove", key.at, { name: key.text, nearest: nearest(key.text, known), known });
  });
  const own = tree.entries.filter((e) => !isVariantKey(e));
  const ownKeys = new Set(own.map((e) => e.key.text));
  const whole = { ...tree, entries: [...own, ...merged.entries.filter((e) => !ownKeys.has(e.key.text))] };
  return checkShape(whole, kind, report) && clear ? whole : undefined;
}

const isVariantKey = ({ key }: Entry): boolean => key.text === "based-on" || key.text === "change";

const openedKey = (tree: MapNode): MapNode["at"] =>
  tree.entries.find(({ key }) => key.text === "change")?.key.at ?? tree.at;
