import type { Difference } from "../../diff/difference.js";
import type { Figure, Shown } from "../../diff/figures.js";
import { sameDimension } from "../../units/dimension.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { blocks, table } from "./table.js";

/** What changed, for people: one line a difference, then the flows, volumes and space times that are not what they were. */
export function diffText(
  before: string,
  after: string,
  differences: readonly Difference[],
  figures: readonly Figure[],
): string {
  const moved = figures.filter((f) => !f.same);
  return blocks(
    `${before} -> ${after}`,
    differences.length > 0 ? differences.map(line).join("\n") : "  no difference in meaning",
    ...(["flow", "volume", "space time"] as const).map((of) =>
      figureTable(
        of,
        moved.filter((f) => f.of === of),
      ),
    ),
  );
}

const marks = { added: "+", removed: "-", renamed: "=", changed: "~" } as const;

function line({ what, of, name, was, key, before, after }: Difference): string {
  const thing = [of, name, what === "changed" && was !== undefined ? `(was ${was})` : ""]
    .filter((x) => x !== "")
    .join(" ");
  const detail =
    what === "renamed"
      ? `: was ${was}`
      : what === "changed"
        ? `${key === undefined ? "" : `${name === "" ? " " : ", "}${key}`}: ${before} -> ${after}`
        : (after ?? before ?? "") === ""
          ? ""
          : `: ${after ?? before}`;
  return `  ${marks[what]} ${thing}${detail}`;
}

const figureTable = (of: string, figures: readonly Figure[]): string =>
  figures.length === 0
    ? ""
    : table(
        [
          { title: of },
          { title: "before", align: "right" },
          { title: "after", align: "right" },
          { title: "", align: "right" },
        ],
        figures.map((f) => [f.name, shown(f.before), shown(f.after), ratio(f)]),
      );

const shown = (s: Shown | undefined): string => (s ? formatQuantity(s.value, s.unit, 5) : "none");

/** By how much it moved: "+12 %"; between kg and L nobody can say. */
function ratio({ before, after }: Figure): string {
  if (!before || !after || before.value === 0) return "";
  if (!sameDimension(before.unit.dimension, after.unit.dimension)) return "";
  const percent = (after.value / before.value - 1) * 100;
  return `${percent > 0 ? "+" : ""}${formatNumber(percent, 3)} %`;
}
