import { parseDocument } from "yaml";
import type { Problem } from "../problems/problem.js";
import { collector, hasErrors } from "../problems/report.js";
import { checkShape, documentKind } from "../read/shape.js";
import type { Tree } from "../read/tree.js";
import { readYaml } from "../read/yaml.js";
import { documents } from "../schema/validators.js";
import { arrange } from "./arrange.js";
import { attachComments } from "./comments.js";
import { cut } from "./cut.js";
import { takeHeader, write } from "./write.js";

/** A text in canonical form, or the reasons why it is left alone. */
export interface Tidied {
  readonly text: string | undefined;
  readonly problems: readonly Problem[];
}

/**
 * A document in canonical form: keys in the order of their declaration, two spaces a level, braces where they fit in 100
 * columns. Slices of the source are rearranged: comments, anchors, quotes and the spelling of numbers stay as they are,
 * and so do names of the author's own, lists, single empty lines, and whether a map stands in braces where that fits.
 * Idempotent. Line ends stay those of the first line.
 * @returns no text where it is no sound YAML, or none of our documents; what the words mean is not looked at
 */
export function tidy(text: string, options: { readonly path?: string } = {}): Tidied {
  const { report, problems } = collector();
  const path = options.path ?? "-";
  const tree = readYaml({ path, text }, report);
  if (!tree || hasErrors(problems)) return { text: undefined, problems };
  const kind = documentKind(tree);
  if (!kind) {
    checkShape(tree, "network", report);
    return { text: undefined, problems };
  }
  const root = cut(text, parseDocument(text, { schema: "failsafe", uniqueKeys: false }));
  if (!root) return { text: undefined, problems };
  attachComments(text, root);
  const header = takeHeader(root);
  arrange(root, documents[kind].shape);
  const tidied = write(header, root);
  const again = readYaml({ path, text: tidied }, collector().report);
  if (!again || !sameMeaning(tree, again)) {
    report("not-tidied", tree.entries[0].key.at, {});
    return { text: undefined, problems };
  }
  return { text: /\r\n|\n/.exec(text)?.[0] === "\r\n" ? tidied.replace(/\n/g, "\r\n") : tidied, problems };
}

/** The same keys with the same texts, whatever the order of keys. */
export function sameMeaning(a: Tree, b: Tree): boolean {
  if (a.type === "scalar") return b.type === "scalar" && a.text === b.text && a.plain === b.plain;
  if (a.type === "list") {
    return (
      b.type === "list" && a.items.length === b.items.length && a.items.every((x, i) => sameMeaning(x, b.items[i]))
    );
  }
  if (b.type !== "map" || a.entries.length !== b.entries.length) return false;
  const others = new Map(b.entries.map((e) => [e.key.text, e.value]));
  return a.entries.every(({ key, value }) => {
    const other = others.get(key.text);
    return other !== undefined && sameMeaning(value, other);
  });
}
