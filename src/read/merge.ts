import { type Entry, type MapNode, type ScalarNode, type Tree, textOf } from "./tree.js";

/** Told of a `null` that would remove what is not there, with the names that are. */
export type NothingThere = (key: ScalarNode, known: readonly string[]) => void;

/**
 * A document with a change laid over it; each node keeps the place where it was written.
 * Maps merge key by key; `null` removes; lists and `to` are replaced whole; a map whose `kind` changes is replaced whole.
 */
export function mergeTree(base: MapNode, change: Tree, nothingThere: NothingThere = () => {}): MapNode {
  if (change.type !== "map") return base;
  const kept = base.entries.flatMap((entry) => mergedEntry(entry, change, nothingThere));
  const there = new Set(base.entries.map((e) => e.key.text));
  const others = change.entries.filter((e) => !there.has(e.key.text));
  for (const { key, value } of others) if (isNull(value)) nothingThere(key, [...there]);
  return { ...base, entries: [...kept, ...others.filter((e) => !isNull(e.value)).map(withoutNulls)] };
}

function mergedEntry(entry: Entry, change: MapNode, nothingThere: NothingThere): Entry[] {
  const other = change.entries.find((e) => e.key.text === entry.key.text);
  if (!other) return [entry];
  if (isNull(other.value)) return [];
  if (entry.value.type !== "map" || other.value.type !== "map" || replaces(entry, other)) return [withoutNulls(other)];
  return [{ key: entry.key, value: mergeTree(entry.value, other.value, nothingThere) }];
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
