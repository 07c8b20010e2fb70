import { explainsNothing } from "../../fit/explains-nothing.js";
import type { Fit } from "../../fit/result.js";
import type { Problem } from "../../problems/problem.js";
import { chance, figureLine } from "../../report/digits.js";
import type { AnswerLine } from "../../report/input.js";
import { reportAims } from "../../report/study/asked.js";
import { steadyTitle } from "../../report/study/before-change.js";
import { decisionWords } from "../../report/study/decision-words.js";
import { studyDiversionWords } from "../../report/study/diversion-words.js";
import { regulatedCaution, regulatedLines } from "../../report/study/regulated-words.js";
import { studyStatesWords } from "../../report/study/states-words.js";
import { isUntested } from "../../report/study/untested.js";
import type { StudyResult } from "../../study/result.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { blocks, type Column, table, wrap } from "./table.js";

/** What a study found, on one screen: the answer first; the report has the rest. */
export function studyText(result: StudyResult, answer: readonly AnswerLine[], report: string | undefined): string {
  const marked = result.stopped
    ? " (interrupted: what was finished)"
    : result.converged
      ? ""
      : result.ranking.some((r) => r.fit && !r.fit.converged)
        ? " (a fit did not converge)"
        : isUntested(result)
          ? " (a network does not balance)"
          : " (a network was not fitted)";
  return blocks(
    `${result.study.title}${marked}`,
    answerText(answer),
    rankingTable(result),
    (result.across?.findings ?? []).map((f) => wrap(`  trials together, ${f.at}: `, f.message)).join("\n"),
    predictionsTable(result),
    [...studyStatesWords(result), ...studyDiversionWords(result)].map((says) => wrap("  ", says)).join("\n"),
    changesTable(result),
    decisionWords(result)
      .map((says) => wrap("  ", says))
      .join("\n"),
    aimsText(result),
    regulatedText(result),
    report === undefined ? "" : `report: ${report}`,
  );
}

/** Lines beside what they are about, which is said once. */
function answerText(answer: readonly AnswerLine[]): string {
  const width = Math.max(0, ...answer.map((a) => a.about.length));
  return answer
    .map(({ about, says }, k) => wrap(`  ${(about === answer[k - 1]?.about ? "" : about).padEnd(width)}  `, says))
    .join("\n");
}

const right = (title: string) => ({ title, align: "right" as const });

function rankingTable(result: StudyResult): string {
  const { ranking } = result;
  if (isUntested(result)) {
    return table(
      [{ title: "network" }, { title: "" }],
      ranking.map(({ rival, plant, problems }) => [
        rival.network.title,
        plant ? "as it is written, no test" : `cannot be: ${problems[0]?.message ?? "it does not balance"}`,
      ]),
    );
  }
  return table(
    [{ title: "rival" }, right("AICc above the best"), right("weight"), { title: "" }],
    ranking.map(({ rival, fit, standing, survives, problems }) => [
      rival.network.title,
      fit && !fit.stopped ? formatNumber(standing.difference, 4) : "",
      fit && !fit.stopped ? chance(standing.weight) : "",
      verdict(fit, survives, problems),
    ]),
  );
}

function verdict(fit: Fit | undefined, survives: boolean, problems: readonly Problem[]): string {
  if (!fit) return `no fit: ${problems[0]?.message ?? "interrupted"}`;
  if (fit.stopped) return "interrupted before its end: not compared";
  if (survives) return "";
  return explainsNothing(fit) ? "no better than a flat line" : "ruled out";
}

function predictionsTable({ predictions }: StudyResult): string {
  if (predictions.length === 0) return "";
  const rows = predictions.map(({ duty, name, value, unit, interval95, bounds, rival }): Row => {
    const shown = people(name, unit);
    const bound = (si: number | undefined): string => (si === undefined ? "" : formatQuantity(si, shown, 3));
    const ends = [bound(bounds?.segregated), bound(bounds?.maximumMixedness)];
    return {
      by: rival.network.title,
      cells: [steadyTitle(duty, name), name, estimate(name, value, interval95, shown), ...ends],
    };
  });
  return tableBy(
    [
      { title: "duty" },
      { title: "figure" },
      { title: "value (95 %)" },
      right("if segregated"),
      right("if mixed at once"),
    ],
    rows,
  );
}

function changesTable({ changes }: StudyResult): string {
  if (changes.length === 0) return "";
  const rows = changes.flatMap(({ change, rival, skipped, figures }): Row[] => {
    const by = rival.network.title;
    if (skipped !== undefined) return [{ by, cells: [change.title, `skipped: ${skipped}`] }];
    return figures.map(({ name, unit, before, value, interval95, probabilityBetter }) => {
      const shown = people(name, unit);
      const better = probabilityBetter === undefined ? "" : chance(probabilityBetter);
      const today = formatQuantity(before, shown, 3);
      return { by, cells: [change.title, name, today, estimate(name, value, interval95, shown), better] };
    });
  });
  return tableBy(
    [{ title: "change" }, { title: "figure" }, right("today"), { title: "value (95 %)" }, right("chance of better")],
    rows,
  );
}

/** Each aim with its answer. */
function aimsText(result: StudyResult): string {
  return reportAims(result)
    .map(({ question, says }) => [wrap("  ", question), ...says.map((s) => wrap("    ", s))].join("\n"))
    .join("\n");
}

/** Regulated figures in blocks of their own. */
function regulatedText(result: StudyResult): string {
  if (result.regulated.length === 0) return "";
  const blocksOf = result.regulated.map(({ rival, duty, figures, lower }) =>
    [
      `  regulated figures, ${duty.title}, '${rival.network.title}'`,
      table(
        [{ title: "" }, right("value"), right("at least, with 95 %"), { title: "from" }],
        duty.regulated
          ? regulatedLines(figures, duty.regulated, rival.network.units, lower).map((l) => [
              l.name,
              l.value,
              l.lower ?? "",
              l.from,
            ])
          : [],
      ),
    ].join("\n"),
  );
  return blocks(...blocksOf, wrap("  ", regulatedCaution));
}

/** A row, and the rival that says so. */
interface Row {
  readonly by: string;
  readonly cells: readonly string[];
}

/** A table whose last column names the rival, where several survive. */
function tableBy(columns: readonly Column[], rows: readonly Row[]): string {
  const several = new Set(rows.map((r) => r.by)).size > 1;
  const by = (r: Row): readonly string[] => [...r.cells, ...Array(columns.length - r.cells.length).fill(""), r.by];
  return several
    ? table([...columns, { title: "by" }], rows.map(by))
    : table(
        columns,
        rows.map((r) => r.cells),
      );
}

/** Fractions of what is fed or made are said in %. */
const people = (name: string, unit: Unit): Unit =>
  /^(conversion|yield|selectivity)/.test(name) ? { ...unit, name: "%", factor: 0.01 } : unit;

function estimate(name: string, value: number, interval: readonly [number, number] | undefined, unit: Unit): string {
  const [low, high] = (interval ?? []).map((v) => inUnit(v, unit));
  return figureLine(name, { value: inUnit(value, unit), unit: unit.name, low, high });
}
