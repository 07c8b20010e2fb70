import type { Bootstrap } from "../../fit/bootstrap.js";
import type { ProfileEnd } from "../../fit/profile.js";
import { unlikeText } from "../../fit/repeats.js";
import type { Resampling } from "../../fit/resample.js";
import type { Estimate, Fit, FitFinding } from "../../fit/result.js";
import { formatNumber } from "../../units/format.js";
import { inUnit } from "../../units/unit.js";
import { errorText, supported } from "./digits.js";
import { blocks, table } from "./table.js";

/** What a fit found, for people. */
export function fitText(title: string, fit: Fit, refits?: Bootstrap): string {
  const { observations, freeParameters, evaluations } = fit;
  const marked = fit.converged ? "" : fit.stopped ? " (interrupted: best so far)" : " (not converged: best found)";
  const unit = fit.residualUnit ? ` (${fit.residualUnit.name || "bare"})^2` : "";
  return blocks(
    `${title}${marked}`,
    parametersTable(fit),
    profileTable(fit),
    refits ? bootstrapTable(refits) : "",
    nuisanceTable(fit),
    correlationTable(fit),
    [
      `  residual sum of squares ${formatNumber(fit.residualSumOfSquares, 6)}${unit} over ${observations} points, ${freeParameters} ${freeParameters === 1 ? "unknown" : "unknowns"}`,
      `  AICc ${formatNumber(fit.aicc, 6)}, BIC ${formatNumber(fit.bic, 6)}, ${evaluations} evaluations`,
      `  ${lackOfFitText(fit)}`,
    ].join("\n"),
    analysesTable(fit),
    heldTable(fit),
    fit.findings.map(findingText).join("\n"),
  );
}

const right = (title: string) => ({ title, align: "right" as const });

function parametersTable(fit: Fit): string {
  return table(
    [
      { title: "parameter" },
      right("value"),
      right("standard error"),
      right("95 % interval"),
      { title: "unit" },
      { title: "" },
    ],
    fit.parameters.map((p) => {
      // A quarter of the interval stands for the error: it is wider than the standard error where facts have a ±.
      const spread = p.interval95 ? (p.interval95[1] - p.interval95[0]) / 4 : p.standardError;
      const ends = p.interval95?.map((v) => supported(v, p.unit, spread));
      return [
        p.name,
        supported(p.value, p.unit, spread),
        p.standardError === undefined ? "not told" : errorText(p.standardError, p.unit),
        ends ? `${ends[0]} to ${ends[1]}` : "not told",
        p.unit.name,
        p.atBound ? `at its ${p.atBound} bound` : "",
      ];
    }),
  );
}

/** What repeated readings say of the fit, in a line. */
export function lackOfFitText({ lackOfFit: lack, unlike }: Pick<Fit, "lackOfFit" | "unlike">): string {
  const apart = unlike ? unlikeText(unlike) : "";
  if (!lack && unlike) return `lack of fit: not told, as ${apart}`;
  if (!lack) return "lack of fit: not told, as no two readings are of one moment (repeat samples, or the test)";
  const { f, p, pure, lack: rest, readings, moments } = lack;
  const chance = p < 0.001 ? "below 0.001" : formatNumber(p, 2);
  return `lack of fit: ${p < 0.01 ? "shown" : "not shown"} by ${readings} readings of ${moments} moments, F ${formatNumber(f, 3)} on ${rest.freedom} and ${pure.freedom} degrees of freedom, chance ${chance}${p > 0.99 ? "; readings of one moment differ by far more than the network misses, as they do where tests differ: this does not speak for the network" : ""}${apart === "" ? "" : `; ${apart}`}`;
}

/** Analyses of the settled vessel; curves are for pictures. */
function analysesTable({ readings }: Fit): string {
  const steady = readings.filter((r) => r.of?.steady);
  if (steady.length === 0) return "";
  return table(
    [{ title: "analysis" }, right("found"), right("fitted"), { title: "unit" }, right("off by (standard deviations)")],
    steady.map((r) => [
      r.key,
      formatNumber(inUnit(r.measured[0], r.unit), 4),
      formatNumber(inUnit(r.fitted[0], r.unit), 4),
      r.unit.name,
      formatNumber(r.residual[0] * r.weight[0], 2),
    ]),
  );
}

const endsIn: Readonly<Record<ProfileEnd, string>> = {
  smooth: "",
  step: "ends in a jump",
  bound: "ends at a bound",
  open: "no end",
};

function profileTable({ profiles }: Fit): string {
  if (!profiles || profiles.length === 0) return "";
  return table(
    [{ title: "profile" }, right("95 % from"), right("to"), { title: "unit" }, { title: "" }],
    profiles.map(({ name, unit, interval95: [low, high], ends, value, deviation }) => {
      const best = value[deviation.indexOf(0)];
      const spread = (Math.abs((high ?? best) - best) + Math.abs((low ?? best) - best)) / 4;
      const words = [...new Set(ends.map((e, k) => (endsIn[e] ? `${endsIn[e]} ${k === 0 ? "below" : "above"}` : "")))];
      const end = (v: number | undefined): string => (v === undefined ? "" : supported(v, unit, spread));
      return [name, end(low), end(high), unit.name, words.filter(Boolean).join(", ")];
    }),
  );
}

const drawnHow: Readonly<Record<Resampling, string>> = {
  residual: "residuals drawn one by one",
  block: "residuals drawn in blocks",
  parametric: "normal errors of the fitted spread",
};

function bootstrapTable({ parameters, resampling, block, done, asked, failed }: Bootstrap): string {
  const rows = parameters.map(({ name, unit, standardError, interval95: [low, high], median }) => {
    const end = (v: number): string => (Number.isFinite(v) ? supported(v, unit, standardError) : "too few");
    return [
      name,
      supported(median, unit, standardError),
      errorText(standardError, unit),
      end(low),
      end(high),
      unit.name,
    ];
  });
  const many = done < asked ? `${done} of ${asked}` : String(done);
  const long = block > 1 ? ` of ${block} points` : "";
  const lost = failed > 0 ? `; ${failed} did not converge and are left out` : "";
  return [
    table(
      [
        { title: "bootstrap" },
        right("median"),
        right("standard error"),
        right("95 % from"),
        right("to"),
        { title: "unit" },
      ],
      rows,
    ),
    `  ${many} refits, ${drawnHow[resampling]}${long}${lost}`,
  ].join("\n");
}

function nuisanceTable({ nuisance }: Fit): string {
  const rows = Object.entries(nuisance).flatMap(([key, terms]) =>
    Object.entries(terms as Record<string, Estimate>).map(([name, e]) => [
      `${name} of ${key}`,
      supported(e.value, e.unit, e.standardError),
      errorText(e.standardError, e.unit),
      e.unit.name,
    ]),
  );
  if (rows.length === 0) return "";
  return table([{ title: "with" }, right("value"), right("standard error"), { title: "unit" }], rows);
}

function correlationTable({ correlation: { names, rows } }: Fit): string {
  if (names.length < 2) return "";
  return table(
    [{ title: "correlation" }, ...names.slice(0, -1).map(right)],
    names
      .slice(1)
      .map((name, i) => [
        name,
        ...names.slice(0, i + 1).map((_, j) => (Number.isFinite(rows[i + 1][j]) ? signed(rows[i + 1][j]) : "not told")),
      ]),
  );
}

const signed = (r: number): string => r.toFixed(3).replace("-", "−");

function heldTable({ held }: Fit): string {
  const moved = held.filter((h) => Math.abs(h.deviations) >= 0.05);
  if (moved.length === 0) return "";
  return table(
    [{ title: "declared fact" }, right("moved by (standard deviations)")],
    moved.map((h) => [h.says, formatNumber(h.deviations, 2)]),
  );
}

const findingText = ({ code, message, fix }: FitFinding): string => `${code}: ${message}\n  fix: ${fix}`;
