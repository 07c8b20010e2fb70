import type { YAMLParseError } from "yaml";
import type { Report } from "../problems/report.js";
import { lineText, placeOf, type Span } from "../text/source.js";
import { correctedLine, lineStart, quote } from "./lines.js";

/** A fault where the parser saw it (`at`), and from there to the end of the line (`here`). */
export interface SyntaxFault {
  readonly at: Span;
  readonly here: Span;
  readonly error: YAMLParseError;
  readonly report: Report;
}

/** A colon too many in a text, one too few after a key, or a key indented under a value. */
export function reportColon({ at, here, error, report }: SyntaxFault): void {
  const { line } = placeOf(at);
  const start = lineStart(at.source.text, at.from);
  const text = lineText(at.source, line);
  const split = /^(\s*(?:- )?[^:#]+?:\s+)([^"'[{\s].*?:(?: .*?)?)(\s+#.*|\s*)$/.exec(text);
  if (split) {
    const from = start + split[1].length;
    const span = { source: at.source, from, to: from + split[2].length };
    report("colon-in-text", span, { quoted: quote(split[2]) });
  } else if (reportGlued(at, report)) {
    // said
  } else if (indentOf(lineText(at.source, line + 1)) > indentOf(text) && /:(\s|$)/.test(text)) {
    const next = lineText(at.source, line + 1);
    const from = start + at.source.text.slice(start).indexOf(next, text.length);
    report("bad-indent", { source: at.source, from: from + indentOf(next), to: from + next.trimEnd().length }, {});
  } else
    report("yaml-syntax", here, {
      says: "a key and its value must stand on one line, with a colon and a space between",
      fix: `look for a missing colon on this line; the parser says: ${error.message.replace(/\s+/g, " ")}`,
    });
}

/** `volume:1 L`: a word, where a key and a value were meant. True where that was it. */
export function reportGlued(at: Span, report: Report): boolean {
  const { line } = placeOf(at);
  const glued = /^(\s*(?:- )?)([A-Za-z][\w-]*):([^\s:/].*?)(\s+#.*|\s*)$/.exec(lineText(at.source, line));
  if (!glued) return false;
  const from = lineStart(at.source.text, at.from) + glued[1].length;
  const span = { source: at.source, from, to: from + glued[2].length + 1 + glued[3].length };
  const corrected = correctedLine(span, `${glued[2]}: ${glued[3]}`);
  report("colon-without-space", span, { key: `${glued[2]}:${glued[3]}`, corrected });
  return true;
}

const indentOf = (text: string): number => text.length - text.trimStart().length;
