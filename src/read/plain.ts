import type { Tree } from "./tree.js";

export type Plain = string | number | null | readonly Plain[] | { readonly [key: string]: Plain };

/** The tree as plain values, for the validator: whole numbers as numbers, null where nothing stands, all else as text. */
export function plainOf(tree: Tree): Plain {
  if (tree.type === "list") return tree.items.map(plainOf);
  if (tree.type === "map") {
    const out: Record<string, Plain> = Object.create(null);
    for (const { key, value } of tree.entries) out[key.text] = plainOf(value);
    return out;
  }
  if (tree.empty) return null;
  return tree.plain && /^(0|-?[1-9]\d{0,14})$/.test(tree.text) ? Number(tree.text) : tree.text;
}
