import { atDecimals } from "../digits.js";
import { figures, type Html, paragraph, section, table } from "../html.js";
import type { FurtherTests, StudyReport } from "../input.js";
import { estimateRow } from "./rows.js";

/** The fitted values with their intervals. */
export function parametersSection({ parameters }: StudyReport): Html {
  const rows = parameters.map((p) => {
    const [, value, interval] = estimateRow(p.name, p.estimate);
    const bound = p.atBound ? `at its ${p.atBound} bound` : "";
    return [p.about ? { words: p.name, under: p.about } : p.name, value, interval, bound];
  });
  const columns = [
    { head: "parameter" },
    { head: "value", number: true },
    { head: "95 % interval", number: true },
    { head: "remark" },
  ];
  return section("parameters", "Parameters", [table("Fitted values", columns, rows)]);
}

/** What the tests can tell of the parameters, singly and together. */
export function identifiabilitySection({
  identifiability: { says, correlations, further, figures: drawn },
}: StudyReport): Html {
  const pairs = correlations.map((c) => [`${c.one} and ${c.other}`, atDecimals(c.value, 2)]);
  const columns = [{ head: "pair" }, { head: "correlation", number: true }];
  return section("identifiability", "What the tests can tell of them", [
    ...says.map((words) => paragraph(words)),
    further ? furtherTable(further) : "",
    figures(drawn),
    table("What moves together", columns, pairs),
  ]);
}

/** What one more test would leave of each interval, below what there is. */
function furtherTable({ heads, now, tests }: FurtherTests): Html {
  const columns = [
    { head: "test" },
    { head: "width, % of now", number: true },
    ...heads.map((head) => ({ head, number: true })),
  ];
  return table("What one more test would narrow: expected 95 % intervals, and their width on average", columns, [
    ["as it is", "100", ...now],
    ...tests.map(({ says, width, after }) => [says, width, ...after]),
  ]);
}
