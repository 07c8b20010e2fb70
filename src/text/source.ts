/** A text as it was read, with the path that people know it by. Never edited. */
export interface Source {
  readonly path: string;
  readonly text: string;
  /** Why it was read, where another document asked for it: as a part or as the base of a variant. */
  readonly usedBy?: Use;
}

/** The place that names a file, and what for. */
export interface Use {
  readonly as: "part" | "base";
  readonly at: Span;
}

/** A stretch of a source: UTF-16 offsets, `to` exclusive. */
export interface Span {
  readonly source: Source;
  readonly from: number;
  readonly to: number;
}

/** 1-based lines and columns, as editors count them; the end is exclusive. */
export interface Place {
  readonly line: number;
  readonly column: number;
  readonly endLine: number;
  readonly endColumn: number;
}

/** Where a span lies. Linear in the length of the text before it: for problems, not for hot loops. */
export function placeOf(span: Span): Place {
  const [line, column] = lineAndColumn(span.source.text, span.from);
  const [endLine, endColumn] = lineAndColumn(span.source.text, Math.max(span.from, span.to));
  return { line, column, endLine, endColumn };
}

/** The places that led to a source, the nearest first. */
export function usesOf(source: Source): Use[] {
  const uses: Use[] = [];
  for (let use = source.usedBy; use; use = use.at.source.usedBy) uses.push(use);
  return uses;
}

/** The text of a 1-based line, without its line break. */
export function lineText(source: Source, line: number): string {
  const { text } = source;
  const end = /\r\n|\n|\r/g;
  let from = 0;
  for (let n = 1; n < line; n++) {
    if (end.exec(text) === null) return "";
    from = end.lastIndex;
  }
  return text.slice(from, end.exec(text)?.index);
}

function lineAndColumn(text: string, offset: number): [number, number] {
  let line = 1;
  let start = 0;
  const end = Math.min(offset, text.length);
  for (let i = 0; i < end; i++) {
    const c = text.charCodeAt(i);
    if (c === 10 || (c === 13 && text.charCodeAt(i + 1) !== 10)) {
      line++;
      start = i + 1;
    }
  }
  return [line, end - start + 1];
}
