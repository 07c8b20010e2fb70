import type { Calibration } from "../model/trial.js";
import type { Value } from "../model/value.js";
import { calibrationCurve } from "../numerics/calibration-curve.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type Tree } from "../read/tree.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import { one, type Unit } from "../units/unit.js";
import { resolveDetectorUnit, resolveDetectorValue } from "./detector.js";
import { aboveZero } from "./sign.js";
import { readStandards } from "./standards.js";

/**
 * `calibration:`; undefined where there is none, or none but a compensation for temperature; "faulty" where it is wrong
 * and reported.
 * @param raw the unit of the detector; undefined for a draft
 */
export function resolveCalibration(
  node: Tree | undefined,
  raw: Unit | undefined,
  files: Files,
  report: Report,
): Calibration | undefined | "faulty" {
  if (!node) return undefined;
  const points = child(node, "points");
  const plain = child(node, "rise") ?? child(node, "per") ?? child(node, "blank");
  if (points && plain) {
    report("calibration-twice", plain.at, {});
    return "faulty";
  }
  if (points) return throughPoints(points, raw, files, report);
  if (child(node, "rise") && child(node, "per")) return straight(node, raw, report);
  if (child(node, "temperature") && !plain) return undefined;
  // One of the two without the other: the shape says which is missing.
  if (!child(node, "rise") && !child(node, "per")) report("calibration-incomplete", node.at, {});
  return "faulty";
}

/** Concentration = (raw - blank) / rise * per. */
function straight(node: Tree, raw: Unit | undefined, report: Report): Calibration | "faulty" {
  const blank = resolveDetectorValue(child(node, "blank"), true, report);
  const rise = resolveDetectorValue(child(node, "rise"), true, report);
  const per = resolveDetectorValue(child(node, "per"), false, report);
  if (!rise || !per?.unit || (child(node, "blank") && !blank)) return "faulty";
  let right = aboveZero("the concentration `per`", per, false, report);
  const signal = raw ?? rise.unit;
  for (const [what, value] of [
    ["`blank`", blank],
    ["`rise`", rise],
  ] as const) {
    if (!value || !signal || sameSignal(value, signal)) continue;
    report("reading-unit", value.at, { what, unit: value.unit?.name || "no unit", reading: signal.name });
    right = false;
  }
  // A rise may be negative: some detectors fall with concentration.
  if (rise.of([]) === 0) {
    report("rise-zero", rise.at, {});
    right = false;
  }
  if (!right) return "faulty";
  const [zero, up, by] = [blank?.of([]) ?? 0, rise.of([]), per.of([])];
  const [ofZero, ofUp, ofBy] = [blank, rise, per].map((v) => v?.sd?.([]) ?? 0);
  return {
    perUnit: per.unit,
    rawUnit: signal ?? one,
    concentration: (y) => ((y - zero) / up) * by,
    raw: (c) => zero + (c / by) * up,
    slope: () => by / up,
    doubts: (y) => {
      const c = ((y - zero) / up) * by;
      return [(-by / up) * ofZero, (-c / up) * ofUp, (c / by) * ofBy];
    },
  };
}

/** A curve through standards. */
function throughPoints(node: Tree, raw: Unit | undefined, files: Files, report: Report): Calibration | "faulty" {
  const readingUnit = resolveDetectorUnit(child(node, "reading"), "unit", true, report);
  const valueUnit = resolveDetectorUnit(child(node, "value"), "unit", false, report);
  if (!readingUnit || !valueUnit) {
    for (const key of ["reading", "value"]) {
      const column = child(node, key);
      if (column && !child(column, "unit")) report("unit-missing", column.at, { column: key });
    }
    return "faulty";
  }
  if (raw && !sameUnit(readingUnit, raw)) {
    report("reading-unit", child(node, "reading")?.at ?? node.at, {
      what: "`points`",
      unit: readingUnit.name,
      reading: raw.name,
    });
    return "faulty";
  }
  const standards = readStandards(node, readingUnit, valueUnit, files, report);
  if (!standards) return "faulty";
  const { value, reading } = standards;
  const distinct = new Set(value).size;
  if (value.length < 3 || distinct < 2) {
    report("standards-few", node.at, { standards: value.length, distinct });
    return "faulty";
  }
  const curve = calibrationCurve(value, reading);
  if ("is" in curve) {
    if (curve.is === "flat") report("standards-flat", node.at, { unit: readingUnit.name });
    else report("standards-turn", node.at, { at: formatQuantity(curve.at, valueUnit, 3) });
    return "faulty";
  }
  return {
    perUnit: valueUnit,
    rawUnit: readingUnit,
    concentration: curve.invert,
    raw: curve.at,
    slope: curve.slope,
    doubts: curve.doubts,
    range: curve.range,
    says: `${curve.degree === 1 ? "straight line" : "parabola"} through ${value.length} standards, which scatter by ${formatNumber(curve.spread / readingUnit.factor, 2)} ${readingUnit.name}`,
  };
}

const sameUnit = (a: Unit, b: Unit): boolean =>
  sameDimension(a.dimension, b.dimension) && (!sameDimension(a.dimension, dimensions.signal) || a.name === b.name);

/** Detectors' own words are one dimension: only the same word is the same unit. */
export const sameSignal = (value: Value, unit: Unit): boolean =>
  sameDimension(value.dimension, unit.dimension) &&
  (!sameDimension(unit.dimension, dimensions.signal) || value.unit?.name === unit.name);
