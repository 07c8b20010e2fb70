import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { openText } from "../read/open.js";
import { beside } from "../read/paths.js";
import { resolveDuty } from "../resolve/duty.js";
import { parseChemistry } from "./chemistry.js";
import { filesOf, type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";

/** Reads a duty and the chemistry that it names. */
export function parseDuty(text: string | Reading, options: ParseOptions = {}): Parsed<Duty> {
  const path = options.path ?? "duty.yaml";
  const files = filesOf(path, options);
  return parseDocument("duty", text, { ...options, path }, (tree, report, adopt) => {
    const chemistry = (named: string, at: Parameters<typeof report>[1]): Chemistry | undefined => {
      const full = beside(at.source.path, named);
      const content = openText(full, { text: named, at }, files, report);
      if (content === undefined) return undefined;
      const parsed = parseChemistry(content, { ...options, path: full });
      adopt(parsed.problems);
      return parsed.document;
    };
    return resolveDuty(tree, path, { chemistry }, report);
  });
}
