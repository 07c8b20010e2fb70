import type { Calibration, Counting, Reading, Series, Stage } from "../model/trial.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, type Tree } from "../read/tree.js";
import { dimensions, over, sameDimension } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import { sameSignal } from "./calibration.js";
import { certain } from "./certain.js";
import { resolveDetectorValue } from "./detector.js";
import { aboveZero } from "./sign.js";
import { emptyScope, resolveTemperature, resolveValue } from "./value.js";

/** What the detector's own corrections make of a series. */
export type Staged = Pick<Reading, "stages" | "doubts">;

const perKelvin = over(dimensions.ratio, dimensions.temperature);

/**
 * Corrects a series point by point: dead time of a counter, temperature of the sample, calibration.
 * @returns undefined where something is wrong; reported
 */
export function correct(
  series: Series,
  node: Tree | undefined,
  calibration: Calibration | undefined,
  counting: Counting | undefined,
  report: Report,
): Staged | undefined {
  const stages: Stage[] = [];
  let value = series.value;
  if (counting && counting.deadTime > 0) {
    const live = value.map((n) => 1 - n * counting.deadTime);
    const blind = live.findIndex((share) => !(share > 0));
    if (blind >= 0) {
      const read = formatQuantity(value[blind], series.valueUnit);
      report("counter-blind", child(node, "noise")?.at ?? series.at, { row: series.row[blind], read });
      return undefined;
    }
    value = value.map((n, i) => n / live[i]);
    stages.push({ name: "dead time", unit: series.valueUnit, value });
  }
  const warm = child(child(node, "calibration"), "temperature");
  if (warm && series.beside) {
    const by = temperatureFactor(warm, series.beside, series, report);
    if (!by) return undefined;
    value = value.map((y, i) => y / by[i]);
    stages.push({ name: "temperature", unit: series.valueUnit, value });
  }
  if (!calibration) return { stages, doubts: [] };
  const raw = value;
  value = raw.map(calibration.concentration);
  const lost = value.findIndex(Number.isNaN);
  if (lost >= 0) {
    const read = formatQuantity(raw[lost], series.valueUnit);
    const rest = value.reduce((n, c) => n + (Number.isNaN(c) ? 1 : 0), 0) - 1;
    report("calibration-left", child(node, "calibration")?.at ?? series.at, {
      row: series.row[lost],
      read,
      others: rest,
    });
    return undefined;
  }
  stages.push({ name: "calibration", unit: calibration.perUnit, value });
  return { stages, doubts: doubtsOf(raw, calibration) };
}

function doubtsOf(raw: Float64Array, calibration: Calibration): Float64Array[] {
  const count = calibration.doubts(raw[0]).length;
  const doubts = Array.from({ length: count }, () => new Float64Array(raw.length));
  if (count > 0)
    raw.forEach((y, i) => {
      calibration.doubts(y).forEach((d, k) => {
        doubts[k][i] = d;
      });
    });
  return doubts.filter((d) => d.some((x) => x !== 0));
}

/** 1 + by (T - to) of every point; undefined where something is wrong, reported. */
function temperatureFactor(
  node: Tree,
  temperature: Float64Array,
  series: Series,
  report: Report,
): Float64Array | undefined {
  const to = resolveTemperature(child(node, "to"), emptyScope, report);
  const by = resolveValue(child(node, "by"), perKelvin, emptyScope, report);
  if (!to || !by) return undefined;
  certain("the temperature that a calibration is for", to, report);
  certain("the effect of temperature on a reading", by, report);
  const [zero, share] = [to.of([]), by.of([])];
  const factor = temperature.map((t) => 1 + share * (t - zero));
  const wrong = factor.findIndex((f) => !(f > 0));
  if (wrong < 0) return factor;
  report("temperature-far", node.at, { row: series.row[wrong], kelvin: temperature[wrong] - zero });
  return undefined;
}

/** `noise: {counting: …}`; "faulty" where it is wrong and reported. */
export function resolveCounting(
  node: Tree | undefined,
  raw: Unit | undefined,
  report: Report,
): Counting | undefined | "faulty" {
  if (!node) return undefined;
  const time = resolveValue(child(node, "over"), dimensions.time, emptyScope, report);
  const dead = resolveValue(child(node, "dead-time"), dimensions.time, emptyScope, report);
  if (!time || (child(node, "dead-time") && !dead)) return "faulty";
  if (!aboveZero("the time that a reading counts", time, false, report)) return "faulty";
  if (!aboveZero("the dead time of a counter", dead, true, report)) return "faulty";
  certain("the time that a reading counts", time, report);
  certain("the dead time of a counter", dead, report);
  if (raw && !sameDimension(raw.dimension, over(dimensions.signal, dimensions.time))) {
    report("reading-unit", node.at, { what: "`counting`", unit: "counts per time, such as cps", reading: raw.name });
    return "faulty";
  }
  return { over: time.of([]), deadTime: dead?.of([]) ?? 0 };
}

/** A value in the unit of the concentration, or in that of the detector brought through the calibration. SI; reported. */
export function asConcentration(
  what: string,
  value: Value,
  unit: Unit,
  calibration: Calibration | undefined,
  report: Report,
): number | undefined {
  if (sameSignal(value, unit)) return value.of([]);
  if (calibration && sameSignal(value, calibration.rawUnit)) return calibration.concentration(value.of([]));
  report("reading-unit", value.at, { what, unit: value.unit?.name || "no unit", reading: unit.name });
  return undefined;
}

/** `limits:` as concentrations; "faulty" where they are wrong and reported. */
export function resolveLimits(
  node: Tree | undefined,
  unit: Unit,
  calibration: Calibration | undefined,
  report: Report,
): Reading["limits"] | "faulty" {
  const limits: { below: number | undefined; above: number | undefined } = { below: undefined, above: undefined };
  for (const key of ["below", "above"] as const) {
    const written = child(node, key);
    if (!written) continue;
    const value = resolveDetectorValue(written, true, report);
    const level = value && asConcentration(`\`${key}\``, value, unit, calibration, report);
    if (level === undefined || !value) return "faulty";
    certain(`the limit \`${key}\``, value, report);
    if (Number.isNaN(level)) {
      report("limit-unread", value.at, { limit: formatQuantity(value.of([]), value.unit ?? unit) });
      return "faulty";
    }
    // A detector that falls with concentration is at its lowest where there is most.
    const falls = calibration && !sameSignal(value, unit) && calibration.slope(value.of([])) < 0;
    limits[falls ? (key === "below" ? "above" : "below") : key] = level;
  }
  const { below, above } = limits;
  if (below === undefined || above === undefined || below < above) return limits;
  report("limits-reversed", node?.at ?? { source: { path: "", text: "" }, from: 0, to: 0 }, {
    below: formatQuantity(below, unit),
    above: formatQuantity(above, unit),
  });
  return "faulty";
}

/** Which points are beyond the limits. */
export function censor(value: Float64Array, { below, above }: Reading["limits"]): Int8Array | undefined {
  if (below === undefined && above === undefined) return undefined;
  return Int8Array.from(value, (c) =>
    above !== undefined && c >= above ? 1 : below !== undefined && c <= below ? -1 : 0,
  );
}
