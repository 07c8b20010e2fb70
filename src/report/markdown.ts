import { cautionsFor } from "./cautions.js";
import { chance, estimateLine, figureLine } from "./digits.js";
import type { StudyReport } from "./input.js";
import { withUnit } from "./sections/rows.js";

/** The study on one page of Markdown: the answer, what it makes, what was fitted, which rivals, cautions, provenance. */
export function writeSummary(report: StudyReport): string {
  const { provenance: p } = report;
  const parts = [
    `# ${inline(report.title)}`,
    answered(report),
    table(
      "What it makes",
      ["duty", "quantity", "value (95 %)"],
      report.predictions.map((q) => [q.duty, q.name, figureLine(q.name, q.estimate)]),
    ),
    bullets("Steady states", report.states ?? []),
    bullets("When to divert", report.diversion ?? []),
    table(
      "Changes",
      ["change", "quantity", "today", "value (95 %)", "chance of being better"],
      report.changes.map((c) => [
        c.name,
        c.quantity,
        withUnit(c.today, c.estimate.unit),
        figureLine(c.quantity, c.estimate),
        chance(c.probabilityBetter),
      ]),
    ),
    bullets(
      "What it takes",
      // The first stand in the answer.
      report.aims.length > 2 ? report.aims.map((a) => `${a.question}: ${a.says[0]}`) : [],
    ),
    table(
      "Fitted",
      ["parameter", "value (95 %)", "remark"],
      report.parameters.map((q) => [q.name, estimateLine(q.estimate), q.atBound ? `at its ${q.atBound} bound` : ""]),
    ),
    table(
      "Rivals",
      ["network", "weight", "why"],
      report.rivals.map((r) => [r.network, chance(r.weight), r.verdict]),
    ),
    bullets("Findings", [...grades(report), ...firstFindings(report)]),
    bullets(
      "Cautions",
      cautionsFor(report.cautions).map((c) => `${c.about}: ${c.says}`),
    ),
    `\`${p.command}\`, backmix ${p.version}, seed ${p.seed}`,
  ];
  return `${parts.filter((part) => part !== "").join("\n\n")}\n`;
}

/** The answer, a line for each thing that it is about. */
function answered({ answer }: StudyReport): string {
  const lines = [...new Set(answer.map((a) => a.about))].map((about) => {
    const says = answer.filter((a) => a.about === about).map((a) => a.says);
    return `- **${inline(about)}**: ${inline(says.join(" "))}`;
  });
  return lines.join("\n");
}

const grades = ({ data }: StudyReport): string[] =>
  data.length === 0 ? [] : [`grades of the tests: ${data.map((d) => `${d.trial}, at ${d.at}: ${d.grade}`).join("; ")}`];

/** As many findings as leave room on the page; all of them, and what the data do not support, are in the report. */
const mostFindings = 5;
/** Figures that take more room are left to the report, characters. */
const longestEvidence = 200;

function firstFindings({ findings, answer }: StudyReport): string[] {
  const answered = answer.map((a) => a.says.toLowerCase()).join(" ");
  // What the answer says already is not said twice on one page.
  const others = findings.filter((f) => !answered.includes(f.message.toLowerCase()));
  const told = others
    .slice(0, mostFindings)
    .map((f) => (f.evidence.length > longestEvidence ? f.message : `${f.message} (${f.evidence})`));
  const more = others.length - told.length;
  return more > 0 ? [...told, `${more} more in the report`] : told;
}

function table(heading: string, head: readonly string[], rows: readonly (readonly string[])[]): string {
  if (rows.length === 0) return "";
  const line = (cells: readonly string[]): string =>
    `| ${cells.map((c) => inline(c).replaceAll("|", "\\|")).join(" | ")} |`;
  return [`## ${heading}`, "", line(head), line(head.map(() => "---")), ...rows.map(line)].join("\n");
}

const bullets = (heading: string, items: readonly string[]): string =>
  items.length === 0 ? "" : [`## ${heading}`, "", ...items.map((i) => `- ${inline(i)}`)].join("\n");

/** Words on one line that Markdown does not take for marks. */
const inline = (words: string): string => words.replace(/\s+/g, " ").replace(/([\\`*_<[\]])/g, "\\$1");
