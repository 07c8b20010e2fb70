import { knownConstants } from "./ast.js";
import { functions } from "./functions.js";

/** Words that mean something in values and streams, so that nothing may be named so. */
export const reservedNames: ReadonlySet<string> = new Set([
  "rest",
  "all",
  "t",
  "T",
  ...knownConstants.keys(),
  ...Object.keys(functions),
]);
