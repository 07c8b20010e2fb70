import type { Chemistry } from "../model/chemistry.js";
import type { Report } from "../problems/report.js";
import { openText } from "../read/open.js";
import { beside } from "../read/paths.js";
import { resolveChemistry } from "../resolve/chemistry.js";
import type { Span } from "../text/source.js";
import { filesOf, type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";

/** Reads a chemistry: species, constants, reactions with their rate laws compiled. */
export function parseChemistry(text: string | Reading, options: ParseOptions = {}): Parsed<Chemistry> {
  const path = options.path ?? "chemistry.yaml";
  return parseDocument("chemistry", text, { ...options, path }, (tree, report) => resolveChemistry(tree, path, report));
}

/** Reads the chemistry that another document names; undefined once its problems are told. */
export function chemistryBeside(
  named: string,
  at: Span,
  options: ParseOptions,
  report: Report,
  adopt: (problems: Parsed<Chemistry>["problems"]) => void,
): Chemistry | undefined {
  const full = beside(at.source.path, named);
  const content = openText(full, { text: named, at }, filesOf(at.source.path, options), report);
  if (content === undefined) return undefined;
  const parsed = parseChemistry(content, { ...options, path: full });
  adopt(parsed.problems);
  return parsed.document;
}
