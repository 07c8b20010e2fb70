import type { nextTurns, Turn } from "../../reaction/branches.js";
import { cautionsFor } from "../../report/cautions.js";
import { type BranchPlot, turnWords } from "../../report/study/branch-figure.js";
import { formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";
import { reportedText } from "./steady.js";
import { blocks, pairs, table, wrap } from "./table.js";

type Next = ReturnType<typeof nextTurns>;

/** Where steady states end along an input, and how far that is from now. */
export function branchesText(
  { title, duty, input, found, figuresAt }: BranchPlot,
  next: Next,
  ends: readonly [number, number],
): string {
  const { branches, turns, left } = found;
  const { unit, name, value } = input;
  const quantity = (si: number): string => formatQuantity(si, unit);
  // Two points on a scale differ by kelvins.
  const difference: Unit = unit.offset === 0 ? unit : { ...unit, name: "K", factor: 1, offset: 0 };
  const points = branches.reduce((sum, b) => sum + b.length, 0);
  const rows = [...turns]
    .sort((a, b) => a.at - b.at)
    .map((turn) => [
      quantity(turn.at),
      wordsOf(turn),
      `${turn.at < value ? "\u2212" : "+"}${formatQuantity(Math.abs(turn.at - value), difference)}`,
      ...figuresAt({ state: turn.state, at: turn.at, stable: undefined }).map(reportedText),
    ]);
  const right = (words: string) => ({ title: words, align: "right" as const });
  const columns = [
    right(name),
    { title: "what happens" },
    right("from now"),
    ...duty.report.map((line) => right(line.text)),
  ];
  const sides = [next.rising, next.falling].flatMap((turn) =>
    turn ? [`${name} ${turn.at >= value ? "up" : "down"} to ${quantity(turn.at)}: ${wordsOf(turn)}`] : [],
  );
  const outside = value < ends[0] || value > ends[1];
  const lines: [string, string][] = [
    ["now", `${name} ${quantity(value)}${outside ? ", outside the range" : ""}`],
    [
      "nearest",
      sides.length > 0 ? sides.join("; ") : "nothing found in this range on the branch that the vessel runs at",
    ],
    ["followed", `${branches.length} ${branches.length === 1 ? "branch" : "branches"}, ${points} points`],
    ...(left.length > 0 ? [["not followed", left.join(", ")] as [string, string]] : []),
  ];
  return blocks(
    title,
    rows.length > 0
      ? table(columns, rows)
      : `  No steady state ends or begins to swing between ${quantity(ends[0])} and ${quantity(ends[1])}.`,
    pairs(lines),
    duty.heat ? wrap("  caution  ", cautionsFor({ heat: true }).find((c) => c.about === "Heat")?.says ?? "") : "",
  );
}

/** "ignites as it rises". */
export const wordsOf = (turn: Turn): string => `${turnWords(turn)} as it ${turn.as}`;
