import type { Chemistry } from "../model/chemistry.js";
import { resolveChemistry } from "../resolve/chemistry.js";
import { type Parsed, type ParseOptions, parseDocument } from "./parsed.js";

/** Reads a chemistry: species, constants, reactions with their rate laws compiled. */
export function parseChemistry(text: string, options: ParseOptions = {}): Parsed<Chemistry> {
  const path = options.path ?? "chemistry.yaml";
  return parseDocument("chemistry", text, { ...options, path }, (tree, report) => resolveChemistry(tree, path, report));
}
