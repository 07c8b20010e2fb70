import { entry } from "../problem.js";

/** Studies and the changes that they compare. */
export const studyEntries = {
  "no-change": entry<{ title: string }>({
    severity: "error",
    says: ({ title }) => `'${title}' is listed under \`changes\`, but has no \`change:\``,
    fix: "keep in it only what is different, such as `change: {parameters: {bypass: {value: 2 %}}}`; a whole network belongs under `rivals`",
  }),
  "change-only": entry<{ title: string }>({
    severity: "error",
    says: ({ title }) => `'${title}' is a change to a vessel, not a vessel`,
    fix: "name the network that it changes in its place; a study lists changes under `changes`",
  }),
  "named-twice": entry<{ path: string; key: string }>({
    severity: "error",
    says: ({ path, key }) => `'${path}' stands twice under \`${key}\``,
    fix: "name it once: twice would count it twice",
  }),
  "bad-aim": entry<{ text: string }>({
    severity: "error",
    says: ({ text }) => `'${text}' is no aim`,
    fix: "write a figure as in `report:`, one of `=`, `>=`, `<=`, and a value: `conversion of A >= 95 %`",
    example: { text: "95 % conversion" },
  }),
  "per-trial-duty": entry<{ name: string; duty: string }>({
    severity: "error",
    says: ({ name, duty }) =>
      `'${name}' has a value of its own in each trial, so that no test tells which it has in the duty '${duty}'`,
    fix: ({ name }) => `say so in the duty: \`with: {${name}: …}\`, with a \`±\` for what is unsure`,
  }),
} as const;
