import { kinds } from "../compartments/index.js";
import { child, type MapNode, type Tree, textOf } from "../read/tree.js";
import { documentShapes } from "../schema/documents.js";
import { type DocumentKind, decidingShape, type KeyShape, type Shape } from "../schema/shape.js";

/** What may stand at a place: by its key's declaration, or by its shape alone where the key is the author's own. */
export interface Allowed {
  readonly shape: Shape;
  readonly key?: KeyShape;
}

/** All that may stand at a path of a document; several where the language tells them apart by what is written. */
export function allowedAt(kind: DocumentKind, path: readonly string[], tree: MapNode | undefined): readonly Allowed[] {
  let here: readonly Allowed[] = [{ shape: documentShapes(kinds)[kind] }];
  let node: Tree | undefined = tree;
  for (const key of path) {
    here = here.flatMap(({ shape }) => below(shape, key, node));
    node = child(node?.type === "list" ? node.items.find((i) => child(i, key)) : node, key);
  }
  return here;
}

/** What may stand under a key of a shape. */
function below(shape: Shape, key: string, node: Tree | undefined): readonly Allowed[] {
  return recordsOf(shape, node).flatMap((record): readonly Allowed[] => {
    if (record.is === "named") return [{ shape: record.each }];
    const found = Object.hasOwn(record.keys, key) ? record.keys[key] : undefined;
    return found ? [{ shape: found.shape, key: found }] : [];
  });
}

type Keyed = Extract<Shape, { is: "record" | "named" }>;

/** The maps that a shape may be, as far as what stands there tells them apart. */
export function recordsOf(shape: Shape, node: Tree | undefined): readonly Keyed[] {
  switch (shape.is) {
    case "record":
    case "named":
      return [shape];
    case "list":
      return recordsOf(shape.of, node?.type === "list" ? undefined : node);
    case "either":
      return shape.of.flatMap((s) => recordsOf(s, node));
    case "depends": {
      const told = node?.type === "map";
      if (told) return [child(node, shape.on) ? shape.present : shape.absent];
      return [shape.absent, shape.present];
    }
    case "variant": {
      const which = textOf(node, shape.by);
      const deciding: Shape = decidingShape(shape);
      const chosen =
        which !== undefined && Object.hasOwn(shape.of, which) ? [shape.of[which]] : Object.values(shape.of);
      return chosen
        .filter((v) => !v.later)
        .map(({ keys }) => {
          const own = keys[shape.by] ?? { says: "What sort it is.", required: true };
          return { is: "record", keys: { ...keys, [shape.by]: { ...own, shape: deciding } } };
        });
    }
    default:
      return [];
  }
}

/** What the language says of a word that decides between variants: a kind of compartment. */
export function wordSays(shape: Shape, by: string, word: string): string | undefined {
  if (shape.is === "variant" && shape.by === by && Object.hasOwn(shape.of, word)) return shape.of[word].says;
  if (shape.is === "list") return wordSays(shape.of, by, word);
  if (shape.is === "either") return shape.of.map((s) => wordSays(s, by, word)).find((s) => s !== undefined);
  return undefined;
}
