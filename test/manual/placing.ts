import { parse } from "yaml";
import type { KeyShape, RecordShape, Shape } from "../../src/schema/shape.js";

/** A way into a shape: keys by name, `*` for any name, `[]` for an item, kinds and alternatives by name or number. */
type Step = string | number;

/** A key of the language, and how to get there. */
export interface Place {
  readonly steps: readonly Step[];
  readonly key: KeyShape;
}

/** Every key below a shape that this version honours. Changes, which are parts of the same again, are not entered. */
export function placesIn(shape: Shape, steps: readonly Step[] = []): Place[] {
  switch (shape.is) {
    case "record":
      return Object.entries(shape.keys)
        .filter(([, key]) => !key.later && !key.elsewhere)
        .flatMap(([name, key]) => {
          const here = [...steps, name];
          return [{ steps: here, key }, ...(name === "change" ? [] : placesIn(key.shape, here))];
        });
    case "named":
      return placesIn(shape.each, [...steps, "*"]);
    case "list":
      return placesIn(shape.of, [...steps, "[]"]);
    case "variant":
      return Object.entries(shape.of)
        .filter(([, { later }]) => !later)
        .flatMap(([kind, { keys }]) => placesIn({ is: "record", keys }, [...steps, kind]));
    case "either":
      return shape.of.flatMap((one, i) => placesIn(one, [...steps, i]));
    case "depends":
      return (["absent", "present"] as const).flatMap((form) => placesIn(shape[form], [...steps, form]));
    default:
      return [];
  }
}

/** The smallest document with a value at a place: besides it, the examples of the keys that must be there. */
export function documentWith(shape: Shape, [step, ...rest]: readonly Step[], value: unknown): unknown {
  if (step === undefined) return value;
  switch (shape.is) {
    case "record":
      return recordWith(shape, String(step), documentWith(shape.keys[step].shape, rest, value));
    case "named":
      return { probe: documentWith(shape.each, rest, value) };
    case "list":
      return Array.from({ length: shape.length ?? 1 }, () => documentWith(shape.of, rest, value));
    case "variant":
      return {
        ...(documentWith({ is: "record", keys: shape.of[step].keys }, rest, value) as object),
        [shape.by]: step,
      };
    case "either":
      return documentWith(shape.of[Number(step)], rest, value);
    case "depends":
      return documentWith(step === "absent" ? shape.absent : shape.present, rest, value);
    default:
      throw new Error(`nothing lies below a ${shape.is}`);
  }
}

function recordWith({ keys, oneOf }: RecordShape, name: string, value: unknown): Record<string, unknown> {
  const chosen = oneOf?.includes(name) ? name : oneOf?.find((key) => keys[key].example !== undefined);
  const needed = new Set<string>();
  for (let key = keys[name].needs; key !== undefined && !needed.has(key); key = keys[key].needs) needed.add(key);
  const wanted = Object.entries(keys).filter(([key, { required }]) => required || key === chosen || needed.has(key));
  const others = wanted.map(([key, k]) => [key, k.example === undefined ? {} : parse(k.example)]);
  // The order of the declaration: what the document is comes first.
  const all = new Map<string, unknown>([...others, [name, value]] as [string, unknown][]);
  return Object.fromEntries(Object.keys(keys).flatMap((key) => (all.has(key) ? [[key, all.get(key)]] : [])));
}
