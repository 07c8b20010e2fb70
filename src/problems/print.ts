import { placeOf, type Span, usesOf } from "../text/source.js";
import { excerpt, harmless } from "./excerpt.js";
import { inFileOrder } from "./order.js";
import type { Problem } from "./problem.js";

/**
 * Problems for people, in file order, a blank line between two:
 * place, code and message; the line with marks under the fault; the files that led there, where it is a part or a base;
 * the earlier place where two disagree; the fix.
 */
export function printProblems(problems: readonly Problem[], options: { colour?: boolean } = {}): string {
  const paint = options.colour ? inColour : plain;
  return inFileOrder(problems)
    .map((problem) => printProblem(problem, paint))
    .join("\n\n");
}

function printProblem({ code, severity, message, fix, at, also }: Problem, paint: Paint): string {
  const word = severity === "warning" ? `warning ${code}` : code;
  const kind = severity === "warning" ? paint.warning : paint.error;
  const lines = [`${paint.place(placeText(at))} ${kind(word)}: ${harmless(message)}`, ...marked(at, kind)];
  const uses = usesOf(at.source);
  uses.forEach((use, i) => {
    if (i < fewUses || i === uses.length - 1) lines.push(`  ${chainWord[use.as]} ${paint.place(placeText(use.at))}`);
    else if (i === fewUses) lines.push("  …");
  });
  if (also) lines.push(`${paint.place(placeText(also.at))} ${harmless(also.says)}`, ...marked(also.at, kind));
  lines.push(`  ${paint.fix("fix:")} ${harmless(fix)}`);
  return lines.join("\n");
}

/** So many files of a long chain are shown, and the last. */
const fewUses = 5;

/** What the file above is to the place that names it. */
const chainWord = { part: "used by", base: "base of" } as const;

function placeText(at: Span): string {
  const { line, column } = placeOf(at);
  return `${harmless(at.source.path)}:${line}:${column}`;
}

/** The line and the marks; nothing where the source has no text to show. */
function marked(at: Span, kind: (text: string) => string): string[] {
  if (at.source.text.trim() === "") return [];
  const { line, text, before, under } = excerpt(at);
  const gutter = " ".repeat(String(line).length);
  return [`  ${line} | ${text}`.trimEnd(), `  ${gutter} | ${" ".repeat(before)}${kind("^".repeat(under))}`];
}

interface Paint {
  place(text: string): string;
  error(text: string): string;
  warning(text: string): string;
  fix(text: string): string;
}

const plain: Paint = { place: (t) => t, error: (t) => t, warning: (t) => t, fix: (t) => t };

const ansi = (code: number) => (text: string) => `\u001b[${code}m${text}\u001b[0m`;
const inColour: Paint = { place: ansi(1), error: ansi(31), warning: ansi(33), fix: ansi(36) };
