import type { YAMLParseError } from "yaml";
import type { Report } from "../problems/report.js";
import { lineText, placeOf, type Source, type Span } from "../text/source.js";

/** Words the faults that the YAML parser found. One finding a line: what follows the first is mostly its echo. */
export function reportSyntax(source: Source, errors: readonly YAMLParseError[], report: Report): void {
  const lines = new Set<number>();
  for (const error of [...errors].sort((a, b) => a.pos[0] - b.pos[0])) {
    const at: Span = { source, from: error.pos[0], to: Math.max(error.pos[1], error.pos[0] + 1) };
    const { line } = placeOf(at);
    if (lines.has(line)) continue;
    lines.add(line);
    reportOne(at, error, report);
  }
}

function reportOne(at: Span, error: YAMLParseError, report: Report): void {
  const { source, from } = at;
  const toLineEnd = restOfLine(source.text, from);
  const here = { ...at, to: from + Math.max(1, toLineEnd.trimEnd().length) };
  switch (error.code) {
    case "TAB_AS_INDENT":
      return report("tab-indent", at, {});
    case "BAD_INDENT":
      return /\t/.test(source.text.slice(lineStart(source.text, from), from + 1))
        ? report("tab-indent", at, {})
        : report("bad-indent", here, {});
    case "MULTIPLE_DOCS":
      return report("two-documents", here, {});
    case "BAD_SCALAR_START": {
      const text = plainText(toLineEnd);
      return report(
        "leading-character",
        { ...at, to: from + text.length },
        { character: source.text[from], quoted: quote(text) },
      );
    }
    case "BLOCK_AS_IMPLICIT_KEY":
    case "MULTILINE_IMPLICIT_KEY":
      return reportColon(at, error, report);
    case "MISSING_CHAR":
      return reportMissing(at, error, report);
    case "BAD_DQ_ESCAPE":
      return report("yaml-syntax", at, {
        says: "a backslash in double quotes begins an escape that YAML does not have",
        fix: "use single quotes, in which a backslash is a backslash",
      });
    case "BAD_DIRECTIVE":
      return report("yaml-syntax", here, {
        says: "a line that begins with `%` is a YAML directive, which no document uses",
        fix: "remove it; a comment begins with `#`",
      });
    default:
      return report("yaml-syntax", here, {
        says: "this is not YAML as it stands",
        fix: `look at the characters around the mark; the parser says: ${plainSentence(error.message)}`,
      });
  }
}

/** `network: V-3: as built`, or a key whose value began on the line before. */
function reportColon(at: Span, error: YAMLParseError, report: Report): void {
  const text = lineText(at.source, placeOf(at).line);
  const split = /^(\s*(?:- )?[^:#]+?:\s+)(\S.*?: .*?|\S.*?:)(\s+#.*)?$/.exec(text);
  const start = lineStart(at.source.text, at.from);
  if (split && !/^["'[{]/.test(split[2])) {
    const from = start + split[1].length;
    return report(
      "colon-in-text",
      { source: at.source, from, to: from + split[2].length },
      { quoted: quote(split[2]) },
    );
  }
  report("yaml-syntax", at, {
    says: "a key and its value must stand on one line, with a colon and a space between",
    fix: `look for a missing colon on this line or the one before; the parser says: ${plainSentence(error.message)}`,
  });
}

const pairs: Record<string, string> = {
  "}": "a brace",
  "]": "a bracket",
  '"': "a double quote",
  "'": "a single quote",
};

function reportMissing(at: Span, error: YAMLParseError, report: Report): void {
  const closing = /(?:with a|closing) ?(["'\]}])|expected .*?([\]}])/.exec(error.message);
  const found = closing?.[1] ?? closing?.[2] ?? /(["'])quote/.exec(error.message)?.[1];
  if (found && found in pairs) return report("unclosed", at, { what: pairs[found], closing: found });
  report("yaml-syntax", at, {
    says: "something is missing here",
    fix: `the parser says: ${plainSentence(error.message)}`,
  });
}

/** A text in quotes such that YAML reads it back: single ones unless it has such itself. */
export const quote = (text: string): string => (text.includes('"') ? `'${text.replace(/'/g, "''")}'` : `"${text}"`);

/** What a plain value would have been: up to a comment, or the bracket or comma that ends it inside braces. */
function plainText(rest: string): string {
  const end = /\s#|[\r\n]|[,\]}]/.exec(rest);
  return rest.slice(0, end ? end.index : undefined).trimEnd() || rest.slice(0, 1);
}

const restOfLine = (text: string, from: number): string => /^[^\r\n]*/.exec(text.slice(from))?.[0] ?? "";

const lineStart = (text: string, offset: number): number => text.lastIndexOf("\n", offset - 1) + 1;

const plainSentence = (message: string): string => message.replace(/\s+/g, " ").replace(/[.:]?$/, "");
