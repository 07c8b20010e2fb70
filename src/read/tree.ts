import type { Span } from "../text/source.js";

/** A YAML document as we use it: plain nodes, each with its place. Merged documents keep the place of each part. */
export type Tree = MapNode | ListNode | ScalarNode;

export interface MapNode {
  readonly type: "map";
  readonly at: Span;
  readonly entries: readonly Entry[];
}

export interface Entry {
  readonly key: ScalarNode;
  readonly value: Tree;
}

export interface ListNode {
  readonly type: "list";
  readonly at: Span;
  readonly items: readonly Tree[];
}

/** `text` is the content as typed, without quotes; `plain` is false where it stood in quotes. An empty value is null. */
export interface ScalarNode {
  readonly type: "scalar";
  readonly at: Span;
  readonly text: string;
  readonly plain: boolean;
  readonly empty: boolean;
}

/** The value under a key, or undefined. */
export function child(map: Tree | undefined, key: string): Tree | undefined {
  return map?.type === "map" ? map.entries.find((e) => e.key.text === key)?.value : undefined;
}

/** The text of a scalar under a key, or undefined. */
export function textOf(map: Tree | undefined, key: string): string | undefined {
  const node = child(map, key);
  return node?.type === "scalar" && !node.empty ? node.text : undefined;
}

/** The entries of a map, or none. */
export const entriesOf = (node: Tree | undefined): readonly Entry[] => (node?.type === "map" ? node.entries : []);

/** The items of a list; a lone value counts as a list of one. */
export function itemsOf(node: Tree | undefined): readonly Tree[] {
  if (!node || (node.type === "scalar" && node.empty)) return [];
  return node.type === "list" ? node.items : [node];
}
