import { parse } from "yaml";
import type { Json } from "./json.js";
import type { KeyShape, Shape } from "./shape.js";

/** What an editor offers to put at a place: a label, a sentence, and the lines themselves with `${1:…}` where one goes on typing. */
export interface Snippet {
  readonly [key: string]: Json;
  readonly label: string;
  readonly body: Json;
}

/** Whole entries for a map under names of the author's own, or for a list; none for other places. */
export function snippetsOf(shape: Shape): Snippet[] {
  if (shape.is === "list") return entriesOf(shape.of);
  if (shape.is !== "named") return [];
  return entriesOf(shape.each).map(({ body, ...snippet }) => ({ ...snippet, body: { "${1:name}": body } }));
}

/** A record or one of the kinds of a variant, filled in. */
function entriesOf(shape: Shape): Snippet[] {
  switch (shape.is) {
    case "record":
      return [{ label: "new", body: filled(shape.keys) }];
    case "variant":
      return Object.entries(shape.of)
        .filter(([, { later }]) => !later)
        .map(([name, { says, keys }]) => ({
          label: `new ${name}`,
          description: says,
          body: { [shape.by]: name, ...filled(keys, shape.by) },
        }));
    case "either":
      return shape.of.flatMap((one) => (one.is === "record" || one.is === "variant" ? entriesOf(one) : []));
    default:
      return [];
  }
}

/** The keys that a new entry begins with: those that must be there, and those that say what to put. */
function filled(keys: Readonly<Record<string, KeyShape>>, without?: string): Record<string, Json> {
  const put = Object.entries(keys).flatMap(([name, key]): [string, Json][] => {
    const text = key.snippet ?? (key.required ? key.example : undefined);
    return text === undefined || name === without ? [] : [[name, parse(text) as Json]];
  });
  return Object.fromEntries(put);
}
