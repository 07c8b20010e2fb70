import { decidingShape, type KeyShape, type Shape, sortOf } from "../schema/shape.js";
import type { Span } from "../text/source.js";
import { child, type ScalarNode, type Tree } from "./tree.js";

/** A place in a document: what stands there, what should, and how to speak of it. */
export interface Located {
  /** Undefined where the path names something that is not there. */
  readonly node: Tree;
  /** The key that it stands under; undefined at the top. */
  readonly key: ScalarNode | undefined;
  /** The name that it goes by: its key, or that of the list that holds it. */
  readonly name: string;
  /** Undefined where the shape does not know the key. */
  readonly shape: Shape | undefined;
  readonly says: KeyShape | undefined;
  /** The place of the key or of the value, whichever a short mark fits better. */
  readonly mark: Span;
}

/** Follows a JSON Pointer through the tree and the shape at once. */
export function locate(root: Tree, shape: Shape, pointer: string, title: string): Located {
  let here: Located = { node: root, key: undefined, name: title, shape, says: undefined, mark: topMark(root) };
  for (const part of pointer.split("/").slice(1)) here = step(here, part.replace(/~1/g, "/").replace(/~0/g, "~"));
  return here;
}

function step(from: Located, part: string): Located {
  const shape = from.shape && narrow(from.shape, from.node);
  if (from.node.type === "list") {
    const node = from.node.items[Number(part)];
    const of = shape?.is === "list" ? shape.of : undefined;
    return { ...from, node, shape: of, says: undefined, mark: firstLine(node) };
  }
  if (from.node.type !== "map") return from;
  const entry = from.node.entries.find((e) => e.key.text === part);
  if (!entry) return from;
  const says = keyOf(shape, part);
  const inside = shape?.is === "named" && !says ? shape.each : (deciding(from.shape, part) ?? says?.shape);
  return { node: entry.value, key: entry.key, name: part, shape: inside, says, mark: entry.key.at };
}

/** The one shape among alternatives that fits what stands there. */
export function narrow(shape: Shape, node: Tree): Shape | undefined {
  if (shape.is === "either") {
    const sort = node.type === "scalar" ? "value" : node.type;
    return shape.of.find((s) => s.is !== "nothing" && sortOf(s) === sort);
  }
  if (shape.is === "depends") return child(node, shape.on) ? shape.present : shape.absent;
  if (shape.is === "variant") {
    const kind = child(node, shape.by);
    const name = kind?.type === "scalar" ? kind.text : "";
    return Object.hasOwn(shape.of, name) ? { is: "record", keys: shape.of[name].keys } : undefined;
  }
  return shape;
}

function keyOf(shape: Shape | undefined, key: string): KeyShape | undefined {
  if (shape?.is === "record" && Object.hasOwn(shape.keys, key)) return shape.keys[key];
  if (shape?.is === "named" && shape.later && Object.hasOwn(shape.later, key))
    return { shape: { is: "text" }, says: shape.later[key], later: true };
  return undefined;
}

const deciding = (shape: Shape | undefined, key: string): Shape | undefined =>
  shape?.is === "variant" && shape.by === key ? decidingShape(shape) : undefined;

const topMark = (root: Tree): Span =>
  root.type === "map" && root.entries.length > 0 ? root.entries[0].key.at : firstLine(root);

/** The first line of a node, so that a mark does not run over a page. */
export function firstLine(node: Tree): Span {
  const { source, from, to } = node.at;
  const end = source.text.slice(from, to).search(/[\r\n]/);
  return { source, from, to: end < 0 ? to : from + end };
}
