import { entry } from "../problem.js";

/** What can be wrong with a file before anyone asks what it means. */
export const yamlEntries = {
  "empty-file": entry<Record<never, never>>({
    severity: "error",
    says: () => "the file is empty",
    fix: "begin with what it is: `network: TITLE`, then `format: 1`",
  }),
  "not-text": entry<{ file: string }>({
    severity: "error",
    says: ({ file }) => `'${file}' is not a text file`,
    fix: "name the document itself; a text editor saves it as plain text (UTF-8)",
  }),
  "not-a-map": entry<{ found: string }>({
    severity: "error",
    says: (d) => `the file holds ${d.found}, not keys with values`,
    fix: "begin with what it is: `network: TITLE`, then `format: 1`",
  }),
  "file-too-large": entry<{ bytes: number; orMore?: boolean }>({
    severity: "error",
    says: (d) =>
      `the file has ${d.orMore ? "more than 2" : Math.ceil(d.bytes / 104_857.6) / 10} MB; a document may have 2 MB`,
    fix: "keep tables in CSV files and name them here",
    example: { bytes: 11_500_000 },
  }),
  "too-many-parts": entry<{ limit: number }>({
    severity: "error",
    says: (d) => `the file is made of more than ${d.limit} keys, values and lines`,
    fix: "keep tables in CSV files and name them here",
    example: { limit: 50_000 },
  }),
  "and-more": entry<{ code: string; told: number }>({
    severity: "warning",
    says: (d) => `there are more than ${d.told} problems '${d.code}'; the others are not told`,
    fix: "correct these, and check again",
    example: { code: "unused-name", told: 100 },
  }),
  "too-deep": entry<{ limit: number }>({
    severity: "error",
    says: (d) => `brackets and indents nest more than ${d.limit} deep`,
    fix: "look for brackets that are never closed; no document needs more than ten levels",
  }),
  "yaml-syntax": entry<{ says: string; fix: string }>({
    severity: "error",
    says: (d) => d.says,
    fix: (d) => d.fix,
  }),
  "tab-indent": entry<Record<never, never>>({
    severity: "error",
    says: () => "a tab stands where the indent must be spaces",
    fix: "replace each tab at the start of the line by two spaces",
  }),
  "bad-indent": entry<Record<never, never>>({
    severity: "error",
    says: () => "this line is not indented like the lines that it belongs with",
    fix: "give all keys of one group the same number of spaces before them",
  }),
  unclosed: entry<{ what: string; closing: string; comment: boolean }>({
    severity: "error",
    says: (d) => `${d.what} is opened here and not closed`,
    fix: (d) =>
      d.comment
        ? "` #` begins a comment that swallows the rest of the line: put the text in quotes"
        : `add \`${d.closing}\` where it ends`,
  }),
  "two-documents": entry<Record<never, never>>({
    severity: "error",
    says: () => "a second document begins here; a file holds one",
    fix: "move what follows `---` into a file of its own",
  }),
  "duplicate-key": entry<{ key: string }>({
    severity: "error",
    says: (d) => `'${d.key}' stands twice in one map`,
    fix: (d) => `keep one '${d.key}', or rename the other`,
  }),
  "key-not-text": entry<{ found: string }>({
    severity: "error",
    says: (d) => `${d.found} stands where a key must be a word`,
    fix: "write `key: value`; a text that begins with `?`, `[` or `{` needs quotes",
  }),
  "forbidden-key": entry<{ key: string }>({
    severity: "error",
    says: (d) => `'${d.key}' cannot be used as a key`,
    fix: "choose another name",
  }),
  "merge-key": entry<Record<never, never>>({
    severity: "error",
    says: () => "`<<` does not merge maps in YAML 1.2",
    fix: "repeat the keys, or put the shared value into `constants` and use its name",
  }),
  "unknown-anchor": entry<{ name: string; quoted: string }>({
    severity: "error",
    says: (d) => `a value that begins with \`*\` points to an anchor, and there is no \`&${d.name}\` before it`,
    fix: (d) => `if the text itself was meant, put it in quotes: \`${d.quoted}\``,
  }),
  "unused-anchor": entry<{ name: string; quoted: string }>({
    severity: "error",
    says: (d) => `a value that begins with \`&\` names an anchor, and nothing uses \`*${d.name}\``,
    fix: (d) => `if the text itself was meant, put it in quotes: \`${d.quoted}\``,
  }),
  "anchor-circle": entry<{ name: string }>({
    severity: "error",
    says: (d) => `\`*${d.name}\` stands inside what \`&${d.name}\` names, so it would hold itself`,
    fix: "write the value out in one of the two places",
  }),
  "too-many-copies": entry<{ limit: number }>({
    severity: "error",
    says: (d) => `aliases (\`*name\`) copy more than ${d.limit} values into the document`,
    fix: "write values once and refer to them by name, under `constants`",
  }),
  "yaml-tag": entry<{ tag: string; quoted: string }>({
    severity: "error",
    says: (d) => `a value that begins with \`!\` is a YAML tag (\`${d.tag}\`), which no document uses`,
    fix: (d) => `remove it, or put the text in quotes: \`${d.quoted}\``,
  }),
  "leading-character": entry<{ character: string; quoted: string }>({
    severity: "error",
    says: (d) => `a value cannot begin with \`${d.character}\` unless it stands in quotes`,
    fix: (d) => `write \`${d.quoted}\``,
  }),
  "colon-in-text": entry<{ quoted: string }>({
    severity: "error",
    says: () => "a colon with a space after it begins a new value in the middle of this text",
    fix: (d) => `put the text in quotes: \`${d.quoted}\``,
  }),
  "comma-in-braces": entry<{ text: string; corrected: string }>({
    severity: "error",
    says: (d) => `inside braces and brackets a comma cuts '${d.text}' in two`,
    fix: (d) => `write \`${d.corrected}\`, or give the value a line of its own`,
  }),
  "colon-without-space": entry<{ key: string; corrected: string }>({
    severity: "error",
    says: (d) => `without a space after the colon '${d.key}' is one word, not a key with a value`,
    fix: (d) => `write \`${d.corrected}\``,
  }),
} as const;
