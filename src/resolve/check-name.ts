import { reservedNames } from "../expressions/reserved.js";
import type { Report } from "../problems/report.js";
import type { ScalarNode } from "../read/tree.js";

/** Reports a name that breaks the rules; true where it is fine. */
export function checkName(key: ScalarNode, report: Report): boolean {
  if (reservedNames.has(key.text)) report("reserved-name", key.at, { name: key.text });
  else if (!/^[A-Za-z][A-Za-z0-9_-]*$/.test(key.text)) report("bad-name", key.at, { name: key.text });
  else return true;
  return false;
}
