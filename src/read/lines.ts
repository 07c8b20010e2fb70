import { lineText, placeOf, type Span } from "../text/source.js";

/** A text in quotes such that YAML reads it back. */
export const quote = (text: string): string => (/["\\]/.test(text) ? `'${text.replace(/'/g, "''")}'` : `"${text}"`);

export const restOfLine = (text: string, from: number): string => {
  const end = text.slice(from).search(/[\r\n]/);
  return end < 0 ? text.slice(from) : text.slice(from, from + end);
};

export const lineStart = (text: string, offset: number): number => text.lastIndexOf("\n", offset - 1) + 1;

/** The first line of a span with the span replaced, without its indent: how it should have been written. */
export function correctedLine(span: Span, by: string): string {
  const { line, column, endLine, endColumn } = placeOf(span);
  const text = lineText(span.source, line);
  return `${text.slice(0, column - 1)}${by}${line === endLine ? text.slice(endColumn - 1) : ""}`.trim();
}

/** What a ` #` within a plain value cut off with no space after it, `#1` of `Cond #1`: a comment to YAML, hardly to its author. */
export function cutOff({ source, from, to }: Span): string | undefined {
  if (/^["']/.test(source.text.slice(from, to))) return undefined;
  return /^[ \t]+#[^\s#].*/.exec(restOfLine(source.text, to))?.[0].trimEnd();
}
