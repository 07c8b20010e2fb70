import { drawChanges, type IntervalRow, intervalsTable } from "../../draw/intervals.js";
import { chance } from "../digits.js";
import { figure, type Html, list, section, table } from "../html.js";
import type { Change, StudyReport } from "../input.js";
import { estimateRow, grouped, withUnit } from "./rows.js";

/** What each change would bring, beside today. */
export function changesSection({ changes, decisions }: StudyReport): Html {
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
  const drawn = grouped(changes, (c) => `${c.quantity}, ${c.estimate.unit}`).map(([quantity, list], k) => {
    const reference = { value: list[0].today, label: "today" };
    const intervals = { title: quantity, quantity, rows: list.flatMap(changeRow), reference };
    return figure({
      name: `change-${k + 1}`,
      drawing: drawChanges(intervals, { untitled: true }),
      data: { table: intervalsTable(intervals) },
      caption: `After each change, with the chance of being better than today: ${quantity}.`,
    });
  });
  return section("changes", "Changes compared", [...drawn, table("Changes", columns, rows), list(decisions)]);
}

function changeRow(c: Change): readonly IntervalRow[] {
  const { value, low, high } = c.estimate;
  if (value === undefined || low === undefined || high === undefined) return [];
  return [{ label: c.name, value, low, high, text: `better: ${chance(c.probabilityBetter)}` }];
}
