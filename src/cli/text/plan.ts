import type { ExpectedParameter } from "../../plan/expected.js";
import type { Plan, PlannedReading } from "../../plan/result.js";
import { samplerTime } from "../../plan/sheet.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { errorText, supported } from "./digits.js";
import { blocks, pairs, table, wrap } from "./table.js";

const percent = (x: number): string => `${formatNumber(100 * x, 3)} %`;

/** A planned test, for people. */
export function planText(network: string, trial: string, plan: Plan, time: Unit): string {
  return blocks(
    `${network}: plan of '${trial}'`,
    pairs(factsOf(plan, time)),
    parametersText(plan),
    ...plan.readings.map((r) => readingText(r, time)),
    truncationText(plan, time),
    plan.alarms
      .map((a) => blocks(wrap(`alarm ${a.code}: `, a.message), wrap("  next: ", a.next)).replace("\n\n", "\n"))
      .join("\n"),
    plan.cautions.map((c) => wrap("caution: ", c)).join("\n"),
  );
}

function factsOf({ dose, recommended, stop, stopWithin, meanTime }: Plan, time: Unit): [string, string][] {
  const rows: [string, string][] = [];
  if (dose) rows.push(["amount", `${formatQuantity(dose.value, dose.unit)}${dose.is === "step" ? " (step)" : ""}`]);
  if (dose && recommended)
    rows.push(["recommended", `${formatQuantity(recommended.value, dose.unit, 2)}: ${recommended.because}`]);
  if (meanTime !== undefined) rows.push(["mean time", formatQuantity(meanTime, time, 3)]);
  const turns = meanTime === undefined ? "" : `, ${formatNumber(stop / meanTime, 2)} mean times`;
  rows.push(["stop at", `${formatQuantity(stop, time, 3)}${turns}`]);
  if (stopWithin !== undefined)
    rows.push([
      "or as late as",
      `${formatQuantity(stopWithin, time, 3)}, where parameters lie elsewhere within their bounds`,
    ]);
  return rows;
}

function parametersText({ parameters, withRecommended, recommended }: Plan): string {
  if (parameters.length === 0) return "";
  const rows = parameters.map((p, i) => {
    const other = withRecommended?.[i];
    return [
      p.name,
      supported(p.value, p.unit, p.sd),
      p.sd === undefined ? "cannot be told" : errorText(p.sd, p.unit),
      p.interval ? intervalText(p) : "",
      ...(other ? [other.sd === undefined ? "" : errorText(other.sd, p.unit)] : []),
      p.unit.name,
    ];
  });
  const head = table(
    [
      { title: "parameter" },
      { title: "value", align: "right" },
      { title: "expected ±", align: "right" },
      { title: "95 % interval", align: "right" },
      ...(withRecommended ? [{ title: "± with recommended", align: "right" as const }] : []),
      { title: "" },
    ],
    rows,
  );
  return recommended && !withRecommended ? `${head}\n  (the amount is about the recommended one)` : head;
}

const intervalText = ({ interval, unit, sd }: ExpectedParameter): string =>
  interval ? interval.map((v) => supported(v, unit, sd)).join(" to ") : "";

function readingText(r: PlannedReading, time: Unit): string {
  const rows: [string, string][] = [
    [
      "peak",
      `${formatQuantity(r.peak, r.unit, 3)}, noise ${formatQuantity(r.noise.floor, r.unit, 2)}${r.noise.assumed ? " (assumed)" : ""}`,
    ],
    ["last sample", formatQuantity(r.end, r.unit, 3)],
  ];
  if (r.t10)
    rows.push([
      "t10",
      `${formatQuantity(r.t10.value, time, 3)} ± ${formatQuantity(r.t10.sd, time, 2)}, samples ${formatQuantity(r.t10.spacing, time, 2)} apart there`,
    ]);
  if (r.best) rows.push(["efficiency", `${percent(r.best.efficiency)} of the best times for these parameters`]);
  const before = r.times.filter((t) => t <= 0);
  const after = [...r.times].filter((t) => t > 0).map(samplerTime);
  const shown = after.length > 60 ? [...after.slice(0, 5), "…", ...after.slice(-3)] : after;
  const best = r.best ? groups([...r.best.times].map((t) => inUnit(t, time))) : "";
  return blocks(
    `at ${r.at}`,
    pairs(rows),
    [
      wrap(
        "  samples  ",
        `${before.length} before the injection, then ${after.length} at ${shown.join(", ")} (h:min:s)`,
      ),
      ...(best ? [wrap("  best     ", `${best} ${time.name}`)] : []),
    ].join("\n"),
  );
}

/** Times that stand close together as one stretch: `12 to 14 (8)`. */
function groups(times: readonly number[]): string {
  const parts: number[][] = [];
  const gap = times.length > 1 ? (3 * (times[times.length - 1] - times[0])) / 100 : 0;
  for (const t of times) {
    const last = parts[parts.length - 1];
    if (last && t - last[last.length - 1] <= gap) last.push(t);
    else parts.push([t]);
  }
  return parts
    .map((p) =>
      p.length === 1
        ? formatNumber(p[0], 3)
        : `${formatNumber(p[0], 3)} to ${formatNumber(p[p.length - 1], 3)} (${p.length})`,
    )
    .join(", ");
}

function truncationText({ truncation }: Plan, time: Unit): string {
  if (truncation.length === 0) return "";
  return table(
    [
      { title: "stopped at" },
      { title: "area seen", align: "right" },
      { title: "mean / true", align: "right" },
      { title: "variance / true", align: "right" },
    ],
    truncation.map((t) => [
      formatQuantity(t.stop, time, 3),
      percent(t.area),
      formatNumber(t.mean, 3),
      formatNumber(t.variance, 2),
    ]),
  );
}
