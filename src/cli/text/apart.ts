import type { TellsApart } from "../../plan/tell-apart.js";
import { chance } from "../../report/digits.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";
import { blocks, table, wrap } from "./table.js";

/** Most tests that are shown. */
const shown = 6;
/** What rounding leaves. */
const nothing = 1e-6;
/** Below this sum of squared deviations a test is as good as none. */
const little = 4;

/** Which test tells a network from its rival best, the most telling first. */
export function apartText(rival: string, tests: readonly TellsApart[], time: Unit): string {
  if (tests.length === 0) return wrap("  ", `'${rival}' could not be fitted to any of these tests`);
  const rows = tests
    .slice(0, shown)
    .map((t) => [
      t.says,
      t.difference < nothing ? "0" : formatNumber(t.difference, 3),
      chance(t.chance),
      t.difference < nothing ? "nowhere" : `${t.at}, ${formatQuantity(t.time, time, 3)}`,
    ]);
  const none =
    tests[0].difference < little
      ? wrap("  ", `None of these tests tells '${rival}' apart: refitted, it shows nearly the same curves.`)
      : "";
  return blocks(
    table(
      [
        { title: `to tell it from '${rival}'` },
        { title: "missed, in sd^2", align: "right" },
        { title: "chance to be told", align: "right" },
        { title: "where it shows most" },
      ],
      rows,
    ),
    none,
  );
}
