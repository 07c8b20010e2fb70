import type { CleanStep } from "../../data/clean.js";
import type { Figure } from "../../data/figure.js";
import type { MomentsResult, ReadingMoments } from "../../data/moments.js";
import { formatNumber } from "../../units/format.js";
import { inUnit } from "../../units/unit.js";
import { squared } from "../units.js";
import { errorText, supported } from "./digits.js";
import { blocks, pairs, table, wrap } from "./table.js";

/** What the data of a trial say by themselves, for people. */
export function momentsText(title: string, { readings, grade, findings, notSupported }: MomentsResult): string {
  const grades = { A: "fit for a number that counts", B: "fit for modelling", C: "to look at only" };
  return blocks(
    `${title}: grade ${grade}, ${grades[grade]}`,
    ...readings.map(readingText),
    findings
      .map((f) =>
        [
          wrap(`${f.weight} ${f.code} at ${f.at}: `, `${f.message} (${f.evidence})`, 100, 4),
          wrap("  could be: ", f.couldBe),
          wrap("  next: ", f.next),
        ].join("\n"),
      )
      .join("\n"),
    notSupported.map((words, k) => wrap(k === 0 ? "not told: " : "          ", words)).join("\n"),
  );
}

function readingText(r: ReadingMoments): string {
  const main: [string, Figure][] = [
    ["recovery", r.recovery],
    ["mean", r.mean],
    ["variance", r.variance],
    ["skewness", r.skewness],
    ["t10", r.t10],
    ["t16", r.t16],
    ["t50", r.t50],
    ["t84", r.t84],
    ["t90", r.t90],
    ...Object.entries(r.indices),
  ];
  const rows = main
    .filter(([, f]) => f.value !== undefined)
    .map(([name, f]): [string, string] => [
      name,
      `${r.percentilesShifted && /^t\d\d$/.test(name) ? "≈ " : ""}${figureText(name, f)}${name === "recovery" ? expectedText(r) : ""}`,
    ]);
  const share =
    r.tail.is === "exponential"
      ? `, ${percent(r.tailShare.area)} of the area and ${percent(r.tailShare.variance)} of the variance`
      : "";
  return blocks(
    `at ${r.at}`,
    rows.length > 0 ? pairs([...rows, ["tail", `${r.tail.is}${share}`]]) : "",
    r.steps.length > 1 ? stepsTable(r) : "",
  );
}

const expectedText = ({ expected }: ReadingMoments): string =>
  expected === undefined ? "" : `, where ${percent(expected)} of the flow leaves`;

function figureText(name: string, f: Figure): string {
  if (f.value === undefined) return f.why;
  const isShare = name === "recovery";
  const unit = isShare ? { ...f.unit, name: "%", factor: 0.01 } : f.unit;
  const error = !f.standardError ? "" : ` ± ${errorText(f.standardError, unit)}`;
  return `${supported(f.value, unit, f.standardError)}${error}${unit.name ? ` ${unit.name}` : ""}`;
}

const percent = (x: number): string => `${formatNumber(100 * x, 2)} %`;

function stepsTable({ steps, timeUnit: time }: ReadingMoments): string {
  const number = (si: number | undefined, unit: CleanStep["unit"]): string =>
    si === undefined ? "" : formatNumber(inUnit(si, unit));
  return table(
    [
      { title: "after cleaning step" },
      { title: "area", align: "right" },
      { title: `mean, ${time.name}`, align: "right" },
      { title: `variance, ${squared(time).name}`, align: "right" },
      { title: `t10, ${time.name}`, align: "right" },
    ],
    steps.map((s) => [
      s.name,
      `${formatNumber(s.area / s.unit.factor / time.factor)} ${s.unit.name} ${time.name}`,
      number(s.mean, time),
      number(s.variance, squared(time)),
      `${s.approximate && s.t10 !== undefined ? "≈ " : ""}${number(s.t10, time)}`,
    ]),
  );
}
