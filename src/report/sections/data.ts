import { escapeText } from "../../svg/svg.js";
import { formatNumber } from "../../units/format.js";
import { beside, type Cell, type Html, section, table } from "../html.js";
import type { DataQuality, StudyReport } from "../input.js";
import { findingBlock } from "./findings.js";
import { estimateRow } from "./rows.js";

/** How good each test is: grade, what bears on it, what the curve says without a model, what each cleaning step did. */
export function dataSection({ data, dataRemarks = [] }: StudyReport): Html {
  return section("data", "Quality of the tests", [
    ...data.map(gradeOf),
    ...dataRemarks.map(findingBlock),
    figuresTable(data),
    beside(data.map(stepsTable)),
  ]);
}

const nameOf = (d: DataQuality): string => `${d.trial}, at ${d.at}`;

const gradeOf = (d: DataQuality): Html =>
  `<p class="graded"><span class="grade"><span class="unseen">grade </span>${escapeText(d.grade)}</span>${escapeText(nameOf(d))}${d.clean ? '<span class="quiet">: nothing in the log speaks against it</span>' : ""}</p>`;

/** One row for each test: they are read downwards. */
function figuresTable(data: readonly DataQuality[]): Html {
  const names = [...new Set(data.flatMap((d) => d.figures.map((f) => f.name)))];
  const rows = data.map((d): Cell[] => [
    nameOf(d),
    ...names.map((name): Cell => {
      const found = d.figures.find((f) => f.name === name);
      if (!found) return "";
      const [, words, under] = estimateRow(name, found.estimate);
      return under === "" ? words : { words, under };
    }),
  ]);
  return table(
    "Read from the curves, without a model; below each value its 95 % interval",
    [{ head: "test" }, ...names.map((head) => ({ head, number: true }))],
    rows,
  );
}

function stepsTable(d: DataQuality): Html {
  const { area, time } = d.stepUnits;
  return table(
    `${d.trial}: what each cleaning step left`,
    [
      { head: "after" },
      { head: `area, ${area}`, number: true },
      { head: `mean, ${time}`, number: true },
      { head: `variance, ${time}²`, number: true },
      { head: `t10, ${time}`, number: true },
    ],
    d.steps.map((s) => [s.name, ...[s.area, s.mean, s.variance, s.t10].map((v) => formatNumber(v, 4))]),
  );
}
