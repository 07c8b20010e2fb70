import { entry } from "../problem.js";

/** What the tools for a model library run into; no file can show these by itself. */
export const libraryEntries = {
  "not-tidied": entry({
    severity: "error",
    says: (_: Record<never, never>) =>
      "the document is written in a way that cannot be tidied without changing what it says",
    fix: "write keys on one line each, without `? ` before them, and tidy again",
    example: {},
  }),
  "not-written-back": entry({
    severity: "error",
    says: (d: { name: string; why: string }) => `the value of '${d.name}' cannot be put back: ${d.why}`,
    fix: (d) => `give '${d.name}' a \`value:\` of its own, a number with its unit, and write the fitted value there`,
    example: { name: "bypass", why: "it is made of other names" },
  }),
} as const;
