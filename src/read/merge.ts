import { child, type Entry, type MapNode, type Tree, textOf } from "./tree.js";

/**
 * A document with a change laid over it; each node keeps the place where it was written.
 * Maps merge key by key; `null` removes; lists and `to` are replaced whole; a map whose `kind` changes is replaced whole.
 */
export function mergeTree(base: MapNode, change: Tree): MapNode {
  if (change.type !== "map") return base;
  const kept = base.entries.flatMap((entry) => mergedEntry(entry, change));
  const added = change.entries.filter((e) => !child(base, e.key.text) && !isNull(e.value)).map(withoutNulls);
  return { ...base, entries: [...kept, ...added] };
}

function mergedEntry(entry: Entry, change: MapNode): Entry[] {
  const other = change.entries.find((e) => e.key.text === entry.key.text);
  if (!other) return [entry];
  if (isNull(other.value)) return [];
  if (entry.value.type !== "map" || other.value.type !== "map" || replaces(entry, other)) return [withoutNulls(other)];
  return [{ key: entry.key, value: mergeTree(entry.value, other.value) }];
}

function replaces(base: Entry, change: Entry): boolean {
  if (base.key.text === "to") return true;
  const kind = textOf(change.value, "kind");
  return kind !== undefined && kind !== textOf(base.value, "kind");
}

/** What is new has nothing to remove: a `null` in it says that the key is not there. */
function withoutNulls(entry: Entry): Entry {
  if (entry.value.type !== "map") return entry;
  const entries = entry.value.entries.filter((e) => !isNull(e.value)).map(withoutNulls);
  return { key: entry.key, value: { ...entry.value, entries } };
}

const isNull = (node: Tree): boolean => node.type === "scalar" && node.empty;
