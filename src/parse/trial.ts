import { checkTrial } from "../check/trial.js";
import type { Trial } from "../model/trial.js";
import { resolveTrial } from "../resolve/trial.js";
import { filesOf, type Held, type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";

/**
 * Reads a trial and the tables that it names. Places are checked against a vessel later (`checkTrial`).
 * @param held what else is to be asked of a trial, also of one that has errors: what is wrong is unknown in it
 */
export function parseTrial(text: string | Reading, options: ParseOptions = {}, held?: Held<Trial>): Parsed<Trial> {
  const path = options.path ?? "trial.yaml";
  return parseDocument("trial", text, { ...options, path }, (tree, report, adopt) => {
    const trial = resolveTrial(tree, path, filesOf(path, options), report);
    checkTrial(undefined, trial, report);
    held?.(trial, report, adopt);
    return trial;
  });
}
