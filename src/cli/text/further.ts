import type { FurtherTest } from "../../plan/further.js";
import { formatNumber } from "../../units/format.js";
import { inUnit } from "../../units/unit.js";
import { type Column, table } from "./table.js";

/** Most tests that are shown. */
const shown = 6;

/** Further tests with the intervals that they would leave, the most telling first. */
export function furtherText(tests: readonly FurtherTest[]): string {
  if (tests.length === 0) return "  no further test that was looked at would narrow these intervals";
  const columns: Column[] = [
    { title: "a further test" },
    { title: "intervals, of their width", align: "right" },
    ...tests[0].parameters.map((p) => ({ title: [p.name, p.unit.name].filter(Boolean).join(", ") })),
  ];
  const rows = tests
    .slice(0, shown)
    .map(({ says, remains, parameters }) => [
      says,
      `${formatNumber(100 * remains, 2)} %`,
      ...parameters.map(({ after, unit }) =>
        after ? after.map((v) => formatNumber(inUnit(v, unit), 3)).join(" to ") : "untold",
      ),
    ]);
  return table(columns, rows);
}
