import { placeOf } from "../text/source.js";
import type { Problem, Severity } from "./problem.js";

/** A problem as scripts and editors get it. Lines and columns from 1, the end exclusive, columns in UTF-16 units. */
export interface ProblemJson {
  readonly code: string;
  readonly severity: Severity;
  readonly message: string;
  readonly fix: string;
  readonly file: string;
  readonly line: number;
  readonly column: number;
  readonly endLine: number;
  readonly endColumn: number;
}

/** One problem for JSON output. */
export function problemJson({ code, severity, message, fix, at }: Problem): ProblemJson {
  return { code, severity, message, fix, file: at.source.path, ...placeOf(at) };
}
