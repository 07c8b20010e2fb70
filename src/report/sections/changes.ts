import { chance } from "../digits.js";
import { figures, type Html, list, section, table } from "../html.js";
import type { StudyReport } from "../input.js";
import { changeFigures } from "../interval-figures.js";
import { estimateRow, withUnit } from "./rows.js";

/** What each change would bring, beside today. */
export function changesSection(report: StudyReport): Html {
  const { changes, decisions } = report;
  const rows = changes.map((c) => [
    c.skipped ? { words: c.name, under: c.skipped } : c.name,
    c.quantity,
    ...estimateRow("", c.estimate).slice(1),
    withUnit(c.today, c.estimate.unit),
    chance(c.probabilityBetter),
  ]);
  const columns = [
    { head: "change" },
    { head: "quantity" },
    { head: "value", number: true },
    { head: "95 % interval", number: true },
    { head: "today", number: true },
    { head: "chance of being better", number: true },
  ];
  return section("changes", "Changes compared", [
    figures(changeFigures(report)),
    table("Changes", columns, rows),
    list(decisions),
  ]);
}
