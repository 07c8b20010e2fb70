import { nearest } from "../text/nearest.js";
import { type Dimension, dimensions, times, toPower } from "./dimension.js";
import { lowest, otherSpellings, symbols } from "./table.js";
import type { Unit } from "./unit.js";

/** Why a text is no unit; offsets into the text. `nearest` is the whole unit that was probably meant. */
export interface UnitFault {
  readonly fault: "unknown" | "malformed" | "offset";
  /** The part that is wrong. */
  readonly part: string;
  readonly from: number;
  readonly to: number;
  readonly nearest?: string;
}

/** True where a text was no unit. */
export const isUnitFault = (x: Unit | UnitFault): x is UnitFault => "fault" in x;

/**
 * Reads a unit: symbols with exponents (`m3`, `m^2`, `L^0.5`, `s^-1`, `m³`), joined by `/`, and by `·`, `*` or, in
 * brackets, a space: `W/(m2 K)`, `L/mol/min`, `1/min`. Division takes one factor at a time, from the left.
 * degC and degF stand alone only: within a product a temperature is a difference, and that is K.
 */
export function parseUnit(text: string): Unit | UnitFault {
  const reader: Reader = { text, at: 0, factors: 0, offset: 0 };
  const product = readProduct(reader, false);
  if ("fault" in product) return withNearest(text, product);
  if (reader.at < text.length) return malformed(reader);
  const { up, down } = lowest(product.up, product.down);
  return { name: text, factor: up / down, offset: reader.offset, dimension: product.dimension };
}

interface Reader {
  readonly text: string;
  at: number;
  /** How many factors were read in all: an offset allows no second. */
  factors: number;
  offset: number;
  /** The symbol that the offset is of. */
  point?: UnitFault;
}

interface Product {
  readonly up: number;
  readonly down: number;
  readonly dimension: Dimension;
}

function readProduct(reader: Reader, bracketed: boolean): Product | UnitFault {
  let total: Product | undefined;
  let power = 1;
  for (;;) {
    const factor = readFactor(reader, total === undefined);
    if ("fault" in factor) return factor;
    total = total ? join(total, factor, power) : factor;
    const sign = /^(?:\s*([/·*])\s*|(\s+)(?=[^\s)]))/.exec(reader.text.slice(reader.at));
    if (!sign || (!bracketed && /\s/.test(sign[0]))) return total;
    power = sign[1] === "/" ? -1 : 1;
    reader.at += sign[0].length;
  }
}

function readFactor(reader: Reader, first: boolean): Product | UnitFault {
  const from = reader.at;
  if (reader.text[from] === "(") {
    reader.at++;
    const inner = readProduct(reader, true);
    if ("fault" in inner) return inner;
    if (reader.text[reader.at] !== ")") return malformed(reader);
    reader.at++;
    return raise(inner, readExponent(reader));
  }
  if (first && /^1(?=\/)/.test(reader.text.slice(from))) {
    reader.at++;
    return { up: 1, down: 1, dimension: dimensions.ratio };
  }
  const word = /^(?:[\p{L}°]+|%)/u.exec(reader.text.slice(from))?.[0];
  if (!word) return malformed(reader);
  const symbol = symbols.get(word);
  if (!symbol) return { fault: "unknown", part: word, from, to: from + word.length };
  reader.at += word.length;
  const exponent = readExponent(reader);
  reader.factors++;
  if (symbol.offset !== 0) {
    reader.offset = symbol.offset;
    reader.point ??= { fault: "offset", part: word, from, to: from + word.length };
  }
  if (reader.point && (reader.factors > 1 || exponent !== 1 || !first || from > 0)) return reader.point;
  return raise(symbol, exponent);
}

const superscripts = "⁰¹²³⁴⁵⁶⁷⁸⁹";

function readExponent(reader: Reader): number {
  const rest = reader.text.slice(reader.at);
  const plain = /^(?:\^([-−]?\d+(?:\.\d+)?)|\^\(([-−]?\d+(?:\.\d+)?)\)|(\d+))/.exec(rest);
  if (plain) {
    reader.at += plain[0].length;
    return Number((plain[1] ?? plain[2] ?? plain[3]).replace("−", "-"));
  }
  const raised = /^(⁻?)([⁰¹²³⁴⁵⁶⁷⁸⁹]+)/u.exec(rest);
  if (!raised) return 1;
  reader.at += raised[0].length;
  const size = Number(Array.from(raised[2], (c) => superscripts.indexOf(c)).join(""));
  return raised[1] ? -size : size;
}

const raise = (p: Product, n: number): Product =>
  n === 1
    ? p
    : n >= 0
      ? { up: p.up ** n, down: p.down ** n, dimension: toPower(p.dimension, n) }
      : { up: p.down ** -n, down: p.up ** -n, dimension: toPower(p.dimension, n) };

function join(a: Product, b: Product, power: number): Product {
  const other = raise(b, power);
  return { ...lowest(a.up * other.up, a.down * other.down), dimension: times(a.dimension, other.dimension) };
}

const malformed = (reader: Reader): UnitFault => ({
  fault: "malformed",
  part: reader.text.slice(reader.at) || reader.text,
  from: Math.min(reader.at, Math.max(0, reader.text.length - 1)),
  to: reader.text.length,
});

/** Puts the likely symbol in the place of the unknown one, as often as it takes to make a unit. */
function withNearest(text: string, fault: UnitFault): UnitFault {
  if (fault.fault !== "unknown") return fault;
  const whole = otherSpellings.get(text.toLowerCase());
  if (whole) return { ...fault, nearest: whole };
  let guess = text;
  let wrong: UnitFault = fault;
  for (let tries = 0; tries < 6; tries++) {
    const meant = meantBy(wrong.part);
    if (!meant) return fault;
    guess = guess.slice(0, wrong.from) + meant + guess.slice(wrong.to);
    const reader: Reader = { text: guess, at: 0, factors: 0, offset: 0 };
    const product = readProduct(reader, false);
    if (!("fault" in product)) return reader.at === guess.length ? { ...fault, nearest: guess } : fault;
    if (product.fault !== "unknown") return fault;
    wrong = product;
  }
  return fault;
}

function meantBy(word: string): string | undefined {
  const lower = word.toLowerCase();
  const other = otherSpellings.get(lower);
  if (other && !other.includes("/")) return other;
  for (const symbol of symbols.keys()) if (symbol.toLowerCase() === lower) return symbol;
  return other ?? nearest(word, symbols.keys());
}
