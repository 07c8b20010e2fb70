import type { Chemistry } from "../model/chemistry.js";
import { resolveChemistry } from "../resolve/chemistry.js";
import { type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";

/** Reads a chemistry: species, constants, reactions with their rate laws compiled. */
export function parseChemistry(text: string | Reading, options: ParseOptions = {}): Parsed<Chemistry> {
  const path = options.path ?? "chemistry.yaml";
  return parseDocument("chemistry", text, { ...options, path }, (tree, report) => resolveChemistry(tree, path, report));
}
