import type { CsvOptions } from "../read/csv.js";
import { child, itemsOf, type Tree, textOf } from "../read/tree.js";

/** The column that a table's key names, by header or by position. */
export function column(node: Tree | undefined, file: Tree): { column: string | number; at: Tree["at"] } | undefined {
  const name = child(node, "column");
  if (name?.type !== "scalar") return undefined;
  const isPosition = name.plain && /^\d+$/.test(name.text);
  return { column: isPosition ? Number(name.text) : name.text.trim(), at: name.at ?? file.at };
}

/** What `csv:` says of how a table is written. */
export function csvOptions(node: Tree | undefined): CsvOptions {
  const separator = textOf(node, "separator");
  const decimal = textOf(node, "decimal");
  const header = textOf(node, "header");
  const missing = itemsOf(child(node, "missing")).flatMap((m) => (m.type === "scalar" ? [m.text] : []));
  return {
    ...(separator === undefined ? {} : { separator: /^(tab|\\t)$/i.test(separator) ? "\t" : separator }),
    ...(decimal === "comma" || decimal === "point" ? { decimal } : {}),
    ...(header === undefined ? {} : { header: Number(header) }),
    missing,
  };
}
