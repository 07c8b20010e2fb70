import { escapeText } from "../../svg/svg.js";
import { formatNumber } from "../../units/format.js";
import { type Html, list, section, table } from "../html.js";
import type { DataQuality, StudyReport } from "../input.js";
import { estimateRow } from "./rows.js";

/** How good each test is: grade, why, what the curve says without a model, what each cleaning step did. */
export function dataSection({ data }: StudyReport): Html {
  return section("data", "Quality of the tests", data.map(dataOf));
}

function dataOf(d: DataQuality): Html {
  const { area, time } = d.stepUnits;
  const steps = d.steps.map((s) => [s.name, ...[s.area, s.mean, s.variance, s.t10].map((v) => formatNumber(v, 4))]);
  return [
    `<h3><span class="grade">${escapeText(d.grade)}</span>${escapeText(`${d.trial}, at ${d.at}`)}</h3>`,
    list(d.because),
    table(
      "Read from the curve, without a model",
      [{ head: "figure" }, { head: "value", number: true }, { head: "95 % interval", number: true }],
      d.figures.map((f) => estimateRow(f.name, f.estimate)),
    ),
    table(
      "What each cleaning step left",
      [
        { head: "after" },
        { head: `area, ${area}`, number: true },
        { head: `mean, ${time}`, number: true },
        { head: `variance, ${time}²`, number: true },
        { head: `t10, ${time}`, number: true },
      ],
      steps,
    ),
  ].join("");
}
