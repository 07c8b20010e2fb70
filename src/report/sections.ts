import { drawChanges, drawIntervals, type IntervalRow } from "../draw/intervals.js";
import { typeset } from "../draw/scale.js";
import { escapeText } from "../svg/svg.js";
import { formatNumber } from "../units/format.js";
import { cautionsFor } from "./cautions.js";
import { atDecimals, chance, estimateLine, estimateWords } from "./digits.js";
import { figure, type Html, list, paragraph, section, table, terms } from "./html.js";
import type { Change, DataQuality, Estimate, Prediction, ReportFinding, StudyReport } from "./input.js";

/** The parts of a report in reading order: id, heading, body. One function each. */
export const sections: readonly ((report: StudyReport) => Html)[] = [
  vessel,
  data,
  findings,
  rivals,
  parameters,
  predictions,
  changes,
  grounds,
  provenance,
];

function vessel({ vessel, curves }: StudyReport): Html {
  return section("vessel", "The vessel as fitted", [vessel ? figure(vessel) : "", ...curves.map(figure)]);
}

function data({ data }: StudyReport): Html {
  return section("data", "Quality of the data", data.map(dataOf));
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

function findings({ findings, notSupported }: StudyReport): Html {
  const found =
    findings.length > 0 ? findings.map(findingOf) : [paragraph("The data show nothing that needs a finding.")];
  const not = notSupported.length > 0 ? `<h3>What the data do not support</h3>${list(notSupported)}` : "";
  return section("findings", "Findings", [...found, not]);
}

function findingOf(f: ReportFinding): Html {
  const lines: (readonly [string, string | undefined])[] = [
    ["Evidence", f.evidence],
    ["Could also be", f.couldBe],
    ["Next check", f.next],
  ];
  const said = lines.flatMap(([name, says]) =>
    says ? [`<p><span class="quiet">${name}:</span> ${escapeText(says)}</p>`] : [],
  );
  return `<div class="finding">${paragraph(f.message)}${said.join("")}</div>`;
}

function rivals({ rivals, equals }: StudyReport): Html {
  const best = Math.min(...rivals.map((r) => r.aicc));
  const rows = rivals.map((r) => [
    r.network,
    String(r.freeParameters),
    atDecimals(r.aicc - best, 1),
    chance(r.weight),
    r.verdict,
  ]);
  const columns = [
    { head: "network" },
    { head: "free parameters", number: true },
    { head: "AICc above the best", number: true },
    { head: "weight", number: true },
    { head: "why" },
  ];
  const told = equals.length > 0 ? [paragraph("These data cannot tell apart:"), list(equals)] : [];
  return section("rivals", "Rival networks", [
    table("Ranked by the small-sample Akaike criterion", columns, rows),
    ...told,
  ]);
}

function parameters({ parameters, correlations }: StudyReport): Html {
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
  const pairs = correlations.map((c) => [`${c.one} and ${c.other}`, atDecimals(c.value, 2)]);
  return section("parameters", "Parameters", [
    table("Fitted values", columns, rows),
    table("What moves together", [{ head: "pair" }, { head: "correlation", number: true }], pairs),
  ]);
}

function predictions({ predictions }: StudyReport): Html {
  const driven = predictions.some((p) => p.drivenBy !== undefined);
  const rows = predictions.map((p) => {
    const { bounds, boundsSay } = p;
    const between = bounds
      ? `${formatNumber(bounds.segregated, 3)} to ${formatNumber(bounds.maximumMixedness, 3)}`
      : (boundsSay ?? "");
    return [
      { words: p.duty, under: p.name },
      ...estimateRow("", p.estimate).slice(1),
      bounds && boundsSay ? { words: between, under: boundsSay } : between,
      ...(driven ? [p.drivenBy ?? ""] : []),
    ];
  });
  const columns = [
    { head: "duty" },
    { head: "value", number: true },
    { head: "95 % interval", number: true },
    { head: "segregated to maximum mixedness" },
    ...(driven ? [{ head: "most of the spread from" }] : []),
  ];
  const drawn = grouped(predictions, (p) => `${p.name}, ${p.estimate.unit}`).map(([quantity, list]) =>
    figure({
      drawing: drawIntervals({ title: quantity, quantity, rows: list.flatMap(predictionRow) }, { untitled: true }),
      caption: list.some((p) => p.bounds)
        ? `${quantity}: value, 95 % interval, and where full segregation and maximum mixedness would put it.`
        : `${quantity}: value and 95 % interval.`,
    }),
  );
  return section("predictions", "What it makes", [...drawn, table("Predictions", columns, rows)]);
}

function predictionRow(p: Prediction): readonly IntervalRow[] {
  const { value, low, high } = p.estimate;
  if (value === undefined || low === undefined || high === undefined) return [];
  const text = estimateLine(p.estimate);
  return [{ label: p.duty, value, low, high, text, ...(p.bounds ? { bounds: p.bounds } : {}) }];
}

function changes({ changes }: StudyReport): Html {
  const rows = changes.map((c) => [
    c.skipped ? { words: c.name, under: c.skipped } : c.name,
    c.quantity,
    ...estimateRow("", c.estimate).slice(1),
    formatNumber(c.today, 3),
    chance(c.probabilityBetter),
  ]);
  const columns = [
    { head: "change" },
    { head: "quantity" },
    { head: "value", number: true },
    { head: "95 % interval", number: true },
    { head: "today", number: true },
    { head: "chance of being better", number: true },
  ];
  const drawn = grouped(changes, (c) => `${c.quantity}, ${c.estimate.unit}`).map(([quantity, list]) =>
    figure({
      drawing: drawChanges(
        {
          title: quantity,
          quantity,
          rows: list.flatMap(changeRow),
          reference: { value: list[0].today, label: "today" },
        },
        { untitled: true },
      ),
      caption: `${quantity} after each change, with the chance of being better than today.`,
    }),
  );
  return section("changes", "Changes compared", [...drawn, table("Changes", columns, rows)]);
}

function changeRow(c: Change): readonly IntervalRow[] {
  const { value, low, high } = c.estimate;
  if (value === undefined || low === undefined || high === undefined) return [];
  return [{ label: c.name, value, low, high, text: `better: ${chance(c.probabilityBetter)}` }];
}

function grounds({ assumptions, cautions, tested }: StudyReport): Html {
  return section("grounds", "Assumptions and cautions", [
    tested.length > 0 ? `<h3>What was tested</h3>${list(tested)}` : "",
    assumptions.length > 0 ? `<h3>Assumptions</h3>${list(assumptions)}` : "",
    "<h3>Cautions</h3>",
    terms(cautionsFor(cautions).map((c) => [c.about, c.says])),
  ]);
}

function provenance({ provenance: p }: StudyReport): Html {
  const files = p.files.map(
    (f) => `<li><code>${escapeText(f.path)}</code><br><code class="quiet">sha256 ${escapeText(f.sha256)}</code></li>`,
  );
  return section("provenance", "Where it comes from", [
    `<p><code>${escapeText(p.command)}</code></p>`,
    paragraph(`backmix ${p.version}, seed ${p.seed}. The same files, seed and version give the same numbers.`),
    files.length > 0 ? `<ul>${files.join("")}</ul>` : "",
  ]);
}

/** First cell, value with its unit, interval. */
function estimateRow(name: string, estimate: Estimate): [string, string, string] {
  const { value, interval } = estimateWords(estimate);
  const told = value !== "not estimable" && estimate.unit !== "";
  return [name, told ? `${value}\u2009${typeset(estimate.unit)}` : value, interval];
}

function grouped<T>(list: readonly T[], by: (item: T) => string): readonly (readonly [string, readonly T[]])[] {
  const groups = new Map<string, T[]>();
  for (const item of list) groups.set(by(item), [...(groups.get(by(item)) ?? []), item]);
  return [...groups];
}
