import { entry } from "../problem.js";

/** Studies and the changes that they compare. */
export const studyEntries = {
  "no-change": entry<{ title: string }>({
    severity: "error",
    says: ({ title }) => `'${title}' stands under \`changes\` but has no \`change:\``,
    fix: "write what is different, such as change: {parameters: {bypass: {value: 2 %}}}",
  }),
  "change-only": entry<{ title: string }>({
    severity: "error",
    says: ({ title }) => `'${title}' is a change, not a vessel`,
    fix: "name the network itself here; a study compares changes under `changes`",
  }),
} as const;
