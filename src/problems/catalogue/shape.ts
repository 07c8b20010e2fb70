import { entry } from "../problem.js";

const or = (words: readonly string[]): string =>
  words.length < 2 ? (words[0] ?? "") : `${words.slice(0, -1).join(", ")} or ${words[words.length - 1]}`;

/** What can be wrong with the shape of a document. */
export const shapeEntries = {
  "unknown-document": entry<{ first: string; nearest: string | undefined }>({
    severity: "error",
    says: (d) => `no document begins with '${d.first}'`,
    fix: (d) =>
      d.nearest
        ? `did you mean \`${d.nearest}:\`?`
        : "say first what the file is: `network:`, `trial:`, `chemistry:`, `duty:` or `study:`, with its title",
  }),
  "wrong-document": entry<{ found: string; wanted: string }>({
    severity: "error",
    says: (d) => `this file is a ${d.found}; a ${d.wanted} is wanted here`,
    fix: (d) => `name a file that begins with \`${d.wanted}:\``,
  }),
  "missing-format": entry<Record<never, never>>({
    severity: "error",
    says: () => "the file does not say in which format it is written",
    fix: "add the line `format: 1` under the title",
  }),
  "unsupported-format": entry<{ found: string }>({
    severity: "error",
    says: (d) => `format ${d.found} is not one that this version reads`,
    fix: "write `format: 1`, or use a version of backmix that reads this format",
  }),
  "unknown-key": entry<{ key: string; where: string; nearest: string | undefined; known: readonly string[] }>({
    severity: "error",
    says: (d) => `'${d.key}' is no key of ${d.where}`,
    fix: (d) =>
      d.nearest
        ? `did you mean \`${d.nearest}\`?`
        : `remove it; what may stand here: ${d.known.map((k) => `\`${k}\``).join(", ")}`,
  }),
  "not-here": entry<{ says: string; fix: string }>({
    severity: "error",
    says: (d) => d.says,
    fix: (d) => d.fix,
  }),
  "not-yet": entry<{ what: string }>({
    severity: "error",
    says: (d) => `${d.what} is part of the language, but this version does not honour it yet`,
    fix: "remove it, or use a version of backmix that honours it; it is refused so that nothing is ignored in silence",
  }),
  "missing-key": entry<{ key: string; where: string; example: string | undefined }>({
    severity: "error",
    says: (d) => `${d.where} lacks '${d.key}'`,
    fix: (d) => `add \`${d.key}: ${d.example ?? "…"}\``,
  }),
  "one-of": entry<{ where: string; keys: readonly string[]; found: readonly string[] }>({
    severity: "error",
    says: (d) =>
      d.found.length === 0
        ? `${d.where} lacks one of ${or(d.keys.map((k) => `'${k}'`))}`
        : `${d.where} has ${d.found.map((k) => `'${k}'`).join(" and ")}, which exclude one another`,
    fix: (d) => `write exactly one of ${or(d.keys.map((k) => `\`${k}\``))}`,
  }),
  "empty-value": entry<{ key: string; example: string | undefined }>({
    severity: "error",
    says: (d) => `'${d.key}' has no value`,
    fix: (d) => (d.example ? `write a value, such as \`${d.key}: ${d.example}\`` : "write a value, or remove the key"),
  }),
  "empty-in-change": entry<{ key: string }>({
    severity: "error",
    says: (d) => `'${d.key}' is left empty; in a change that would remove it`,
    fix: (d) => `write \`${d.key}: null\` to remove it, or give it a value`,
  }),
  "wrong-shape": entry<{ key: string; found: string; wanted: string; example: string | undefined }>({
    severity: "error",
    says: (d) => `${d.found} stands at '${d.key}', where ${d.wanted} is wanted`,
    fix: (d) => (d.example ? `write it like \`${d.key}: ${d.example}\`` : `write ${d.wanted}`),
  }),
  "wrong-choice": entry<{ key: string; found: string; of: readonly string[]; nearest: string | undefined }>({
    severity: "error",
    says: (d) => `'${d.found}' is no choice for '${d.key}'`,
    fix: (d) => (d.nearest ? `did you mean \`${d.nearest}\`?` : `write ${or(d.of.map((w) => `\`${w}\``))}`),
  }),
  "not-whole": entry<{ key: string; found: string; atLeast: number; atMost: number | undefined }>({
    severity: "error",
    says: (d) =>
      `'${d.key}' is '${d.found}', not a whole number from ${d.atLeast}${d.atMost === undefined ? "" : ` to ${d.atMost}`}`,
    fix: (d) => `write a whole number such as \`${d.key}: ${Math.max(d.atLeast, 1)}\`, with no unit and no decimals`,
  }),
  "wrong-length": entry<{ key: string; found: number; wanted: number; comma: string | undefined }>({
    severity: "error",
    says: (d) => `'${d.key}' has ${d.found} ${d.found === 1 ? "value" : "values"}, not ${d.wanted}`,
    fix: (d) =>
      d.comma !== undefined
        ? `a comma parts values; decimals are written with a point: \`${d.comma}\``
        : `write ${d.wanted} values in brackets, parted by commas`,
  }),
} as const;
