import { dimensions } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { FlowSheet, SheetBody, SheetUnit } from "./sheet.js";

/** One scale for all bodies (area) and one for all streams (width) of a drawing. */
export interface Scale {
  /** px2 per m3. */
  readonly area: number;
  /** px per m3/s. */
  readonly width: number;
}

const largestArea = 16000; // px2: a body that still leaves room for its neighbours on a page
const widestBody = 300;
const widestStream = 24;
const allBodies = 760; // px: sum of widths along the page
/** Smaller bodies and thinner streams are drawn at this size, or they would vanish. */
export const smallestArea = 64;
export const thinnestStream = 1.5;

/** The largest scales with which the drawing stays within a page's width. */
export function scaleOf(sheet: FlowSheet): Scale {
  const bodies = sheet.bodies.filter((b) => b.volume > 0);
  const root = (b: SheetBody): number => Math.sqrt(b.volume * (b.aspect ?? 1));
  const most = Math.max(0, ...bodies.map((b) => b.volume));
  const longest = Math.max(0, ...bodies.map(root));
  const sum = bodies.filter((b) => b.role === "body").reduce((all, b) => all + root(b), 0);
  const area =
    most > 0 ? Math.min(largestArea / most, (widestBody / longest) ** 2, (allBodies / (sum || longest)) ** 2) : 1;
  const flow = Math.max(0, ...sheet.streams.filter((s) => s.role !== "exchange").map((s) => s.flow));
  return { area, width: flow > 0 ? widestStream / flow : 1 };
}

/** Size in px of a body's box. */
export function bodySize(body: SheetBody, scale: Scale): { readonly width: number; readonly height: number } {
  const area = Math.max(body.volume * scale.area, smallestArea);
  const width = Math.sqrt(area * (body.aspect ?? 1));
  return { width, height: area / width };
}

export const streamWidth = (flow: number, scale: Scale): number => Math.max(thinnestStream, flow * scale.width);

/** A round amount (1, 2 or 5 times a power of ten, in the unit) that is at most `most` SI. */
export function roundAmount(most: number, unit: SheetUnit): number {
  const inUnit = most / unit.factor;
  const decade = 10 ** Math.floor(Math.log10(inUnit));
  const step = [5, 2, 1].find((s) => s * decade <= inUnit * (1 + 1e-9)) ?? 1;
  return step * decade * unit.factor;
}

/** "2.4 m³", "10 L/min": as people write it, with a thin space before the unit. */
export function amount(si: number, unit: SheetUnit, digits = 3): string {
  const asUnit = { name: unit.name, factor: unit.factor, offset: 0, dimension: dimensions.volume };
  return typeset(formatQuantity(si, asUnit, digits));
}

/** Sets units properly: `m3` becomes m³, `K/(m2 s)` K/(m² s), `degC` °C, and the space before the unit a thin one. */
export function typeset(written: string): string {
  return written
    .replace(
      /\b((?:[kcmdµu]?m)|ft|in|yd)([23])\b/g,
      (_, unit: string, power: string) => unit + (power === "2" ? "²" : "³"),
    )
    .replace(/\bdeg([CF])\b/g, "°$1")
    .replace(
      /(\d)e([+-]?)(\d+)/g,
      (_, digit: string, sign: string, power: string) => `${digit}×10${raised(sign + power)}`,
    )
    .replace(/(\d|10[\u2070-\u2079⁰¹²³\u207b]+) (?=[A-Za-zµ°%])/g, "$1\u2009"); // not behind the ³ of m³
}

/** A power set high: 10⁻⁵. */
export const raised = (power: string): string => [...power.replace("+", "")].map((c) => superscripts[c] ?? c).join("");

const superscripts: Readonly<Record<string, string>> = Object.fromEntries(
  [..."0123456789-\u2212"].map((c, k) => [c, [..."⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁻"][k]]),
);
