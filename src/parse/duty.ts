import type { Duty } from "../model/duty.js";
import { resolveDuty } from "../resolve/duty.js";
import { chemistryBeside } from "./chemistry.js";
import { filesOf, type Held, type Parsed, type ParseOptions, parseDocument, type Reading } from "./parsed.js";

/**
 * Reads a duty and the chemistry that it names. Whether it fits a network is checked later (`checkDuty`).
 * @param held what else is to be asked of a duty that has errors, as far as it could be read
 */
export function parseDuty(text: string | Reading, options: ParseOptions = {}, held?: Held<Duty>): Parsed<Duty> {
  const path = options.path ?? "duty.yaml";
  return parseDocument("duty", text, { ...options, path }, (tree, report, adopt) =>
    resolveDuty(
      tree,
      path,
      {
        chemistry: (named, at) => chemistryBeside(named, at, { ...options, path }, report, adopt),
        tables: filesOf(path, options),
      },
      report,
      held && ((duty) => held(duty, report, adopt)),
    ),
  );
}
