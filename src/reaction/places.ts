import type { Plant } from "../compile/plant.js";

/**
 * Which of some places each node belongs to: a place is a body with its members and pockets (`chain`, `core`), one of them
 * (`chain.2`), or a part. Wider places come before narrower ones; equal lists are the same object; nodes of none are left out.
 */
export function placesByNode({ columns }: Plant, places: readonly string[]): Map<number, readonly string[]> {
  const found = new Map<number, readonly string[]>();
  if (places.length === 0) return found;
  const sorted = [...places].sort((a, b) => a.length - b.length);
  const known = new Map<string, readonly string[]>();
  for (let node = 0; node < columns.size; node++) {
    const name = columns.nameOf(node);
    const own = sorted.filter((place) => name === place || name.startsWith(`${place}.`));
    if (own.length === 0) continue;
    const key = own.join(" ");
    const list = known.get(key) ?? own;
    known.set(key, list);
    found.set(node, list);
  }
  return found;
}
