import { placeOf, usesOf } from "../text/source.js";
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
  /** The places that led to the file, the nearest first, where it is a part or the base of a variant. */
  readonly usedBy?: readonly {
    readonly as: "part" | "base";
    readonly file: string;
    readonly line: number;
    readonly column: number;
  }[];
}

/** One problem for JSON output. */
export function problemJson({ code, severity, message, fix, at }: Problem): ProblemJson {
  const uses = usesOf(at.source).map(({ as, at }) => {
    const { line, column } = placeOf(at);
    return { as, file: at.source.path, line, column };
  });
  const usedBy = uses.length > 0 ? { usedBy: uses } : {};
  return { code, severity, message, fix, file: at.source.path, ...placeOf(at), ...usedBy };
}
