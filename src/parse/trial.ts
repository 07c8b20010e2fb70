import { checkTrial } from "../check/trial.js";
import type { Trial } from "../model/trial.js";
import { resolveTrial } from "../resolve/trial.js";
import { filesOf, type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";

/** Reads a trial and the tables that it names. Places are checked against a vessel later (`checkTrial`). */
export function parseTrial(text: string | Reading, options: ParseOptions = {}): Parsed<Trial> {
  const path = options.path ?? "trial.yaml";
  return parseDocument("trial", text, { ...options, path }, (tree, report) => {
    const trial = resolveTrial(tree, path, filesOf(path, options), report);
    if (trial) checkTrial(undefined, trial, report);
    return trial;
  });
}
