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
  }),
  "aim-beyond": entry<{ figure: string; target: string; meant: string }>({
    severity: "error",
    says: ({ figure, target }) => `${figure} cannot be ${target}: all that is fed is 100 %`,
    fix: ({ meant }) => meant,
  }),
  "sweep-inputs": entry<{ count: number }>({
    severity: "error",
    says: ({ count }) => `a sweep goes over one or two inputs, not over ${count}`,
    fix: "name one or two under `over`: `over: {feed.flow: {between: [5 L/min, 15 L/min]}}`",
  }),
  "range-ends": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `the range of '${name}' does not rise`,
    fix: "write the lower end first: `between: [5 L/min, 15 L/min]`",
  }),
  "range-log": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `'${name}' cannot go in equal ratios from a lower end that is not above 0`,
    fix: "take a lower end above 0, or `spacing: linear`",
  }),
  "range-missing": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `nothing says between what '${name}' may move`,
    fix: "write `between: [LOW, HIGH]` beside it; only parameters have bounds of their own",
  }),
  "bad-confidence": entry<{ text: string }>({
    severity: "error",
    says: ({ text }) => `'${text}' is no confidence`,
    fix: "write a share from 50 % to below 100 %, such as `90 %`",
  }),
  "per-trial-duty": entry<{ name: string; duty: string }>({
    severity: "error",
    says: ({ name, duty }) =>
      `'${name}' has a value of its own in each trial, so that no test tells which it has in the duty '${duty}'`,
    fix: ({ name }) => `say so in the duty: \`with: {${name}: …}\`, with a \`±\` for what is unsure`,
  }),
} as const;
