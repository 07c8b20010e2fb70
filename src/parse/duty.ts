import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { decodeText } from "../read/decode.js";
import { beside } from "../read/paths.js";
import { resolveDuty } from "../resolve/duty.js";
import { parseChemistry } from "./chemistry.js";
import { nothingToRead, type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";

/** Reads a duty and the chemistry that it names. */
export function parseDuty(text: string | Reading, options: ParseOptions = {}): Parsed<Duty> {
  const path = options.path ?? "duty.yaml";
  const read = options.read ?? nothingToRead;
  return parseDocument("duty", text, { ...options, path }, (tree, report, adopt) => {
    const chemistry = (named: string, at: Parameters<typeof report>[1]): Chemistry | undefined => {
      const full = beside(at.source.path, named);
      const content = read(full);
      if (content === undefined) {
        report("file-missing", at, { file: named });
        return undefined;
      }
      const parsed = parseChemistry(decodeText(content), { ...options, path: full });
      adopt(parsed.problems);
      return parsed.document;
    };
    return resolveDuty(tree, path, { chemistry }, report);
  });
}
