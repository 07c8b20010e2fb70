import { decidingShape, type KeyShape, type Shape } from "./shape.js";

/**
 * The shape of a change to a document of the given shape: nothing is required, and `null` may stand anywhere inside to remove what is there.
 * A variant whose deciding key may be left out takes the keys of all its kinds; the merged document is checked whole afterwards.
 */
export function partial(shape: Shape): Shape {
  switch (shape.is) {
    case "record":
      return { is: "record", keys: partialKeys(shape.keys) };
    case "named":
      return { ...shape, each: orNothing(partial(shape.each)) };
    case "variant": {
      const keys: Record<string, KeyShape> = {};
      const kinds = Object.entries(shape.of).filter(([, v]) => !v.later);
      for (const [, variant] of kinds)
        for (const key in variant.keys)
          if (
            !keys[key] ||
            isRefused(keys[key]) ||
            (!isRefused(variant.keys[key]) && takesMore(variant.keys[key], keys[key]))
          )
            keys[key] = variant.keys[key];
      keys[shape.by] = { ...keys[shape.by], shape: decidingShape(shape) };
      return { is: "record", keys: partialKeys(keys) };
    }
    case "either":
      return { is: "either", of: shape.of.map(partial) };
    default:
      return shape;
  }
}

function partialKeys(keys: Readonly<Record<string, KeyShape>>): Record<string, KeyShape> {
  const out: Record<string, KeyShape> = {};
  for (const key in keys) {
    const { required: _, needs: __, ...rest } = keys[key];
    out[key] = isRefused(rest) ? rest : { ...rest, shape: orNothing(partial(rest.shape)) };
  }
  return out;
}

/** Where kinds have one key in several forms, the form that nests deeper takes the others, too (the `to` of a part). */
const takesMore = (a: KeyShape, b: KeyShape): boolean => depth(a.shape) > depth(b.shape);

function depth(shape: Shape): number {
  if (shape.is === "either") return Math.max(...shape.of.map(depth));
  if (shape.is === "named") return 1 + depth(shape.each);
  return shape.is === "list" ? 1 + depth(shape.of) : 0;
}

const isRefused = (key: KeyShape): boolean => key.later === true || key.elsewhere !== undefined;

const orNothing = (shape: Shape): Shape => ({
  is: "either",
  of: [...(shape.is === "either" ? shape.of : [shape]), { is: "nothing" }],
});
