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
