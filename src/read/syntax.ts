import type { ErrorCode, YAMLParseError } from "yaml";
import type { Report } from "../problems/report.js";
import { lineText, placeOf, type Source, type Span } from "../text/source.js";
import { reportColon, reportGlued, type SyntaxFault } from "./colons.js";
import { lineStart, quote, restOfLine } from "./lines.js";
import { firstUnclosed } from "./openings.js";

/** Words the faults that the YAML parser found. One finding a line: what follows the first is mostly its echo. */
export function reportSyntax(source: Source, errors: readonly YAMLParseError[], report: Report): void {
  const lines = new Set<number>();
  const said = new Set<number>();
  for (const error of [...errors].sort((a, b) => a.pos[0] - b.pos[0])) {
    const at: Span = {
      source,
      from: error.pos[0],
      to: Math.min(source.text.length, Math.max(error.pos[1], error.pos[0] + 1)),
    };
    const { line } = placeOf(at);
    if (lines.has(line)) continue;
    lines.add(line);
    const opening = closingIsMissing(error) ? firstUnclosed(source.text) : undefined;
    if (opening && said.has(opening.at)) continue;
    if (opening) said.add(opening.at);
    const word = words[error.code] ?? other;
    if (opening) reportUnclosed(source, opening, report);
    else word({ at, here: toLineEnd(at), error, report });
    // What stands after an opening that nothing closes was read as part of it.
    if (opening) return;
  }
}

const closingIsMissing = ({ message }: YAMLParseError): boolean =>
  /Missing closing|must end with a|and end with a/.test(message);

const openerWords: Record<string, string> = {
  "{": "a brace",
  "[": "a bracket",
  '"': "a double quote",
  "'": "a single quote",
};

function reportUnclosed(
  source: Source,
  opening: { at: number; opener: string; closing: string },
  report: Report,
): void {
  const at = toLineEnd({ source, from: opening.at, to: opening.at + 1 });
  const comment = /\s#/.test(source.text.slice(at.from, lineEndOf(at)));
  report("unclosed", at, { what: openerWords[opening.opener], closing: opening.closing, comment });
}

const lineEndOf = ({ source, from }: Span): number => from + restOfLine(source.text, from).length;

function toLineEnd(at: Span): Span {
  const { text } = at.source;
  // What is missed at the very end is missing after the last thing that is there.
  const from = text.slice(at.from).trim() === "" ? Math.max(0, text.slice(0, at.from).trimEnd().length - 1) : at.from;
  const rest = restOfLine(text, from).trimEnd();
  return { ...at, from, to: from + Math.max(1, rest.length) };
}

/** The same, or the first line after it that holds more than a comment. */
function nextText(at: Span): Span {
  const { text } = at.source;
  if (!/^\s*(#|$)/.test(text.slice(at.from, at.to))) return at;
  const [, indent, line] = /^([ \t]*)([^\s#].*?)\s*$/m.exec(text.slice(at.from)) ?? [];
  if (line === undefined) return at;
  const from = text.indexOf(indent + line, at.from) + indent.length;
  return { ...at, from, to: from + line.length };
}

const words: Partial<Record<ErrorCode, (fault: SyntaxFault) => void>> = {
  TAB_AS_INDENT: ({ at, report }) => report("tab-indent", at, {}),
  BAD_INDENT: ({ at, here, report }) => {
    const before = at.source.text.slice(lineStart(at.source.text, at.from), at.from + 1);
    if (before.includes("\t")) report("tab-indent", at, {});
    else report("bad-indent", nextText(here), {});
  },
  MULTIPLE_DOCS: ({ here, report }) => report("two-documents", here, {}),
  BAD_SCALAR_START: ({ at, report }) => reportLeading(at, report),
  BLOCK_AS_IMPLICIT_KEY: reportColon,
  MULTILINE_IMPLICIT_KEY: reportColon,
  RESOURCE_EXHAUSTION: ({ at, report }) => report("too-deep", { ...at, to: at.from + 1 }, { limit: 100 }),
  BAD_DQ_ESCAPE: ({ at, report }) =>
    report(
      "yaml-syntax",
      { ...at, to: at.from + 2 },
      {
        says: "a backslash in double quotes begins an escape that YAML does not have",
        fix: "use single quotes, in which a backslash is a backslash",
      },
    ),
  BAD_DIRECTIVE: ({ here, report }) =>
    report("yaml-syntax", here, {
      says: "a line that begins with `%` is a YAML directive, which no document uses",
      fix: "remove it; a comment begins with `#`",
    }),
};

function reportLeading(at: Span, report: Report): void {
  const text = plainText(restOfLine(at.source.text, at.from));
  const span = { ...at, to: at.from + text.length };
  report("leading-character", span, { character: text[0], quoted: quote(text) });
}

/** Where a value on this line begins with `|` or `>` (a text block, whose text starts on the next line) or `*` (an alias, and no more). */
function markedStart({ source, from }: Span): Span | undefined {
  const start = lineStart(source.text, from);
  const marked = /^(.*?(?::|-)\s+)[|>*]/.exec(lineText(source, placeOf({ source, from, to: from }).line));
  return marked ? { source, from: start + marked[1].length, to: from } : undefined;
}

function other({ at, here, error, report }: SyntaxFault): void {
  const start = /Not a YAML token|Block scalar header|at node end/i.test(error.message) ? markedStart(at) : undefined;
  if (start) reportLeading(start, report);
  else if (/block-seq-ind/.test(error.message))
    report("yaml-syntax", here, {
      says: "a list item (`- `) begins on the line of its key",
      fix: "give each item a line of its own below the key, or write the list in brackets: `[a, b]`",
    });
  else if (/at node end/.test(error.message))
    report("yaml-syntax", here, {
      says: "there is more text after the value has ended",
      fix: "put the whole value in quotes, or remove what follows the closing quote or bracket",
    });
  else if (/Missing , /.test(error.message))
    report("yaml-syntax", here, {
      says: "a comma is missing between two values in brackets",
      fix: "part values in brackets by a comma and a space",
    });
  else if (!reportGlued(at, report))
    report("yaml-syntax", here, {
      says: "this is not YAML as it stands",
      fix: `look at the characters at the mark; the parser says: ${error.message.replace(/\s+/g, " ")}`,
    });
}

/** What a plain value would have been: up to a comment, or the bracket or comma that ends it inside braces. */
function plainText(rest: string): string {
  const end = /\s#|[,\]}]/.exec(rest);
  return rest.slice(0, end ? end.index : undefined).trimEnd() || rest.slice(0, 1);
}
