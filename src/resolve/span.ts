import type { ScalarNode } from "../read/tree.js";
import type { Span } from "../text/source.js";

/**
 * Where a stretch of a scalar's text lies in its file. Quotes are stepped over; where escapes or folded lines make
 * text and file differ, the whole scalar.
 */
export function spanWithin(node: ScalarNode, from: number, to: number): Span {
  const { source } = node.at;
  const start = node.at.from + (node.plain ? 0 : 1);
  if (source.text.slice(start, start + node.text.length) !== node.text) return node.at;
  const first = Math.min(from, Math.max(0, node.text.length - 1));
  return { source, from: start + first, to: start + Math.max(to, first + 1) };
}
