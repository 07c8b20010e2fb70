import type { Problem } from "../../problems/problem.js";
import { escapeText } from "../../svg/svg.js";
import { placeOf } from "../../text/source.js";
import type { Statement, Verified } from "../verified.js";
import { why } from "./verify.js";

/** A library looked over as JUnit XML: a suite per file, a case for its soundness and one for each statement. */
export function junit(folder: string, verified: readonly Verified[]): string {
  const cases = verified.map((v) => [soundness(v), ...v.statements.map((s) => statementCase(v, s))]);
  const total = cases.flat();
  const suites = verified.map((v, i) =>
    [
      `  <testsuite ${attributes({ name: v.file, ...counts(cases[i]) })}>`,
      ...cases[i].map(print),
      "  </testsuite>",
    ].join("\n"),
  );
  const head = `<testsuites ${attributes({ name: `verify ${folder}`, ...counts(total) })}>`;
  return ['<?xml version="1.0" encoding="UTF-8"?>', head, ...suites, "</testsuites>"].join("\n");
}

interface Case {
  readonly name: string;
  readonly file: string;
  readonly line: number;
  /** What went wrong; undefined where nothing did. */
  readonly failure: { readonly message: string; readonly body: string } | undefined;
}

function soundness({ file, problems }: Verified): Case {
  const errors = problems.filter((p) => p.severity === "error");
  const failure = errors[0] && { message: errors[0].message, body: errors.map(problemLine).join("\n") };
  return { name: "is sound", file, line: errors[0] ? placeOf(errors[0].at).line : 1, failure };
}

const problemLine = ({ at, code, message, fix }: Problem): string =>
  `${at.source.path}:${placeOf(at).line} ${code}: ${message}; fix: ${fix}`;

const statementCase = ({ file }: Verified, s: Statement): Case => ({
  name: s.name,
  file,
  line: s.line,
  failure: s.holds ? undefined : { message: why(s), body: `${file}:${s.line} ${s.name}: ${why(s)}` },
});

const counts = (cases: readonly Case[]): { tests: number; failures: number } => ({
  tests: cases.length,
  failures: cases.filter((c) => c.failure).length,
});

function print({ name, file, line, failure }: Case): string {
  const head = `    <testcase ${attributes({ classname: file, name, file, line })}`;
  if (!failure) return `${head}/>`;
  return `${head}><failure ${attributes({ message: failure.message })}>${text(failure.body)}</failure></testcase>`;
}

const attributes = (of: Readonly<Record<string, string | number>>): string =>
  Object.entries(of)
    .map(([key, value]) => `${key}="${text(String(value)).replace(/\n/g, "&#10;")}"`)
    .join(" ");

/** Control characters cannot stand in XML 1.0, not even escaped. */
const text = (s: string): string =>
  escapeText(s.replace(/[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\u{10000}-\u{10ffff}]/gu, "�"));
