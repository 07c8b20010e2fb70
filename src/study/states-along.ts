import { type Branches, branchesAlong } from "../reaction/branches.js";
import { type Input, rowWith } from "./inputs.js";
import { noRow, type Operation, plantOf, type Row } from "./operate.js";

/** Report lines that a steady state answers by itself. */
export const steadyLines = ({ report }: Operation["duty"]): Operation["duty"]["report"] =>
  report.filter((line) => line.what !== "tracer-time" && line.what !== "time-beyond");

/**
 * All steady states of an operation over a range of one of its inputs (SI), as far as they hang together with those that a
 * search finds.
 * @param row what stands in place of the operation's values
 */
export function statesAlong(
  operation: Operation,
  input: Input,
  [from, to]: readonly [number, number],
  row: Row = noRow,
): Branches {
  const rowAt = (value: number): Row => rowWith(row, [input], [value]);
  const present = plantOf(operation, row).plant;
  return branchesAlong(
    { ...operation.duty, report: steadyLines(operation.duty) },
    {
      from,
      to,
      plantAt: (value) => (input.of === "duty" ? present : plantOf(operation, rowAt(value)).plant),
      settingsAt: (value) => rowAt(value).duty,
    },
  );
}
