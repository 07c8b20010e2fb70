import { printProblems } from "../../problems/print.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import type { Statement, Verified } from "../verified.js";
import { blocks } from "./table.js";

/** A library looked over, for people: each file with its problems and statements, then the count. */
export function verifyText(
  folder: string,
  verified: readonly Verified[],
  skipped: readonly string[],
  colour: boolean,
): string {
  const statements = verified.flatMap((v) => v.statements);
  const failed = statements.filter((s) => !s.holds).length;
  const unsound = verified.filter((v) => v.problems.some((p) => p.severity === "error")).length;
  const total = [
    counted(verified.length, "document"),
    unsound > 0 ? `${unsound} unsound` : "all sound",
    counted(statements.length, "check"),
    ...(statements.length === 0 ? [] : [failed > 0 ? `${failed} not held` : "all hold"]),
  ];
  return blocks(
    verified.map(lines).join("\n"),
    printProblems(
      verified.flatMap((v) => v.problems),
      { colour },
    ),
    skipped.length > 0 ? `not looked into: ${skipped.join(", ")}` : undefined,
    `${folder}: ${total.join(", ")}`,
  );
}

function lines({ file, kind, problems, statements }: Verified): string {
  const errors = problems.filter((p) => p.severity === "error").length;
  const state =
    errors > 0 ? counted(errors, "error") : problems.length > 0 ? counted(problems.length, "warning") : "ok";
  const none = kind === "network" && errors === 0 && statements.length === 0 ? ", no checks" : "";
  return [`${file}: ${kind ? `${kind}, ` : ""}${state}${none}`, ...statements.map(line)].join("\n");
}

const line = (s: Statement): string => `  ${s.holds ? "holds" : "FAILS"}  ${s.name}${s.holds ? "" : `: ${why(s)}`}`;

/** How a statement fails: "it is 58.2 min, 3 % off where 0.1 % is allowed". */
export function why({ value, unit, off, within }: Statement): string {
  const found = Number.isNaN(value) ? "there is nothing to measure" : `it is ${formatQuantity(value, unit, 8)}`;
  const allowed = `${formatNumber(within * 100)} % is allowed`;
  return Number.isNaN(off) ? found : `${found}, ${formatNumber(Math.abs(off) * 100, 3)} % off where ${allowed}`;
}

const counted = (n: number, word: string): string => `${n} ${word}${n === 1 ? "" : "s"}`;
