import { estimateWords, noSpread } from "../../report/digits.js";
import { dutyCautions } from "../../report/duty-cautions.js";
import { sweepJumpWords } from "../../report/study/jump-words.js";
import { sweepStatesWords } from "../../report/study/states-words.js";
import type { Sweep, SweepPoint } from "../../study/sweep.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { peopleUnit } from "./people.js";
import { blocks, table, wrap } from "./table.js";

/** A sweep as a table: the inputs, then each figure with its interval where it has one. */
export function sweepText(found: Sweep, carries: string): string {
  const { operation, axes, points, stopped } = found;
  const { report } = operation.duty;
  const first = points.find((p) => p.figures)?.figures;
  const units = report.map((line, k) => peopleUnit(line.what, first?.[k].unit));
  const ends = axes.map(
    ({ input, values, log }) =>
      `${input.name} ${formatQuantity(values[0], input.unit)} to ${formatQuantity(values[values.length - 1], input.unit)} in ${values.length} points${log ? ", equal ratios" : ""}`,
  );
  const whole = points.filter((p) => p.figures);
  const right = (title: string) => ({ title, align: "right" as const });
  const titled = (title: string, unit: Unit | undefined): string =>
    unit && unit.name !== "" ? `${title}, ${unit.name}` : title;
  return blocks(
    `${operation.network.title}: ${operation.duty.title}, ${ends.join("; ")}${stopped ? " (interrupted: what was finished)" : ""}`,
    whole.length === 0
      ? ""
      : table(
          [
            ...axes.map(({ input }) => right(titled(input.name, input.unit))),
            ...report.map((line, k) => ({ title: titled(line.text, units[k]) })),
          ],
          whole.map((p) => [
            ...p.at.map((v, k) => formatNumber(inUnit(v, axes[k].input.unit))),
            ...report.map((_, k) => cellOf(p, k, units[k])),
          ]),
        ),
    leftOut(found),
    carries === "" ? "" : wrap("  ", `in brackets: 95 % of what is possible (${carries})`),
    [...sweepJumpWords(found), ...sweepStatesWords(found)].map((says) => wrap("  ", says)).join("\n"),
    dutyCautions(operation.duty)
      .map(({ says }) => wrap("  caution: ", says))
      .join("\n"),
  );
}

function cellOf({ figures, intervals }: SweepPoint, k: number, unit: Unit | undefined): string {
  const f = figures?.[k];
  if (!f || !unit) return "";
  if (f.why !== undefined) return f.why;
  const [low, high] = (intervals[k] ?? []).map((v) => inUnit(v, unit));
  if (low === undefined) return formatNumber(inUnit(f.value, unit));
  const { value, interval } = estimateWords({ value: inUnit(f.value, unit), unit: "", low, high });
  return interval === noSpread ? value : `${value} (${interval})`;
}

/** Points without a vessel, by their reason. */
function leftOut({ axes, points }: Sweep): string {
  const reasons = new Map<string, SweepPoint[]>();
  for (const p of points) if (p.cannot !== undefined) reasons.set(p.cannot, [...(reasons.get(p.cannot) ?? []), p]);
  return [...reasons]
    .map(([why, at]) => {
      const places = at
        .slice(0, 4)
        .map((p) => p.at.map((v, k) => `${axes[k].input.name} ${formatQuantity(v, axes[k].input.unit)}`).join(", "));
      const more = at.length > places.length ? ` and ${at.length - places.length} more` : "";
      return wrap("  left out: ", `${places.join("; ")}${more}: ${why}`);
    })
    .join("\n");
}
