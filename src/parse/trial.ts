import { checkTrial } from "../check/trial.js";
import { isClosed, type Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { openText } from "../read/open.js";
import { resolveTrial } from "../resolve/trial.js";
import { chemistryBeside } from "./chemistry.js";
import { parseNetwork } from "./network.js";
import { filesOf, type Held, type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";

/**
 * Reads a trial, the tables that it names, its chemistry and its flask. Places are checked against a vessel later (`checkTrial`).
 * @param held what else is to be asked of a trial, also of one that has errors: what is wrong is unknown in it
 */
export function parseTrial(text: string | Reading, options: ParseOptions = {}, held?: Held<Trial>): Parsed<Trial> {
  const path = options.path ?? "trial.yaml";
  const files = filesOf(path, options);
  return parseDocument("trial", text, { ...options, path }, (tree, report, adopt) => {
    const trial = resolveTrial(tree, path, files, report, {
      chemistry: (named, at) => chemistryBeside(named, at, { ...options, path }, report, adopt),
      flask: (full, at): Network | undefined => {
        const text = at.source.text.slice(at.from, at.to).replace(/^(["'])(.*)\1$/, "$2");
        const content = openText(full, { text, at }, files, report);
        if (content === undefined) return undefined;
        const { document, problems } = parseNetwork(content, { ...options, path: full });
        if (!document) adopt(problems);
        return document && isClosed(document) ? document : undefined;
      },
    });
    checkTrial(undefined, trial, report);
    held?.(trial, report, adopt);
    return trial;
  });
}
