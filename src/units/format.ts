import { inUnit, type Unit } from "./unit.js";

/**
 * A number for people: so many significant digits, no trailing zeros, a proper minus, powers of ten only where the
 * number is very small or large. The language reads it back.
 */
export function formatNumber(x: number, digits = 4): string {
  if (Number.isNaN(x)) return "undefined";
  if (!Number.isFinite(x)) return x > 0 ? "infinite" : "minus infinite";
  const rounded = Number(x.toPrecision(Math.min(17, Math.max(1, digits))));
  const size = Math.abs(rounded);
  const text = size !== 0 && (size < 1e-4 || size >= 1e7) ? exponential(size) : String(size);
  return rounded < 0 ? `−${text}` : text;
}

/** An SI value in its unit, for people: "1.5 L/min". A bare number stands alone. */
export function formatQuantity(si: number, unit: Unit, digits = 4): string {
  const number = formatNumber(inUnit(si, unit), digits);
  return unit.name === "" ? number : `${number} ${unit.name}`;
}

const exponential = (x: number): string => x.toExponential().replace("e+", "e");
