/** A cell: text, aligned left; or right where the column holds numbers. */
export interface Column {
  readonly title: string;
  readonly align?: "left" | "right";
}

/**
 * A table in aligned columns, two spaces between, the titles over it; no lines.
 * @param indent spaces before each row
 */
export function table(columns: readonly Column[], rows: readonly (readonly string[])[], indent = 2): string {
  const widths = columns.map((c, i) => Math.max(width(c.title), ...rows.map((r) => width(r[i] ?? ""))));
  const line = (cells: readonly string[]): string =>
    `${" ".repeat(indent)}${cells
      .map((cell, i) => {
        const space = " ".repeat(widths[i] - width(cell));
        return columns[i].align === "right" ? space + cell : cell + space;
      })
      .join("  ")}`.trimEnd();
  return [line(columns.map((c) => c.title)), ...rows.map((r) => line(columns.map((_, i) => r[i] ?? "")))].join("\n");
}

/** Pairs of words and values, values under one another. */
export function pairs(rows: readonly (readonly [string, string])[], indent = 2): string {
  const wide = Math.max(...rows.map(([word]) => width(word)));
  return rows.map(([word, value]) => `${" ".repeat(indent)}${word.padEnd(wide)}  ${value}`.trimEnd()).join("\n");
}

/** Paragraphs with an empty line between. */
export const blocks = (...parts: readonly (string | undefined)[]): string =>
  parts.filter((p) => p !== undefined && p !== "").join("\n\n");

/** Text broken between words to lines of at most `columns`, the later ones indented by `hang`: as deep as the first says. */
export function wrap(first: string, text: string, columns = 100, hang = width(first)): string {
  const lines: string[] = [];
  let line = first;
  let empty = true;
  for (const word of text.split(" ")) {
    if (!empty && width(line) + width(word) + 1 > columns) {
      lines.push(line);
      line = " ".repeat(hang) + word;
    } else line += empty ? word : ` ${word}`;
    empty = false;
  }
  return [...lines, line].join("\n");
}

/** Columns of a terminal, near enough: characters, without those that combine. */
const width = (text: string): number => [...text.replace(/\p{Mark}/gu, "")].length;
