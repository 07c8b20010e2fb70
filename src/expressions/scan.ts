import { isUnitFault, parseUnit, type UnitFault } from "../units/parse.js";
import { one, type Unit } from "../units/unit.js";
import type { Fault } from "./fault.js";

/** One piece of an expression. `unitAt` is where the unit of a number stands. */
export type Token =
  | { readonly type: "number"; readonly value: number; readonly unit: Unit; readonly from: number; readonly to: number }
  | { readonly type: "name"; readonly name: string; readonly from: number; readonly to: number }
  | { readonly type: "sign"; readonly sign: string; readonly from: number; readonly to: number }
  | { readonly type: "end"; readonly from: number; readonly to: number };

const digits = /(?:\d+(?:\.\d+)?|\.\d+)(?:[eE][+\-−]?\d+)?/y;
const word = /\p{L}[\p{L}\p{N}_.-]*/uy;
const signs = /\+\/-|<=|>=|[+\-−*/^(),±<>·]/y;
/** A unit after a number: no space inside but in brackets; `*`, `+` and `,` end it. */
const unitStart = /[\p{L}%°℃℉]|1\/[\p{L}(]/uy;
const unitPiece = /\([^()]*\)|\^[-−]?(?:\d+(?:\.\d+)?)?|[\p{L}\p{N}%°℃℉⁻⁰¹²³⁴⁵⁶⁷⁸⁹·]+|\/(?=[\p{L}(%°])/uy;

/** Cuts a text into pieces; numbers take their unit with them and come out in SI. */
export function scan(text: string): readonly Token[] | Fault {
  const tokens: Token[] = [];
  const brackets: boolean[] = []; // true for those of a call, where a comma separates arguments
  let at = 0;
  for (;;) {
    at = match(/\s*/y, text, at)?.to ?? at;
    if (at >= text.length) break;
    const start = match(digits, text, at);
    if (start) {
      const number = readNumber(text, at, start.to, brackets.at(-1) === true);
      if ("code" in number) return number;
      tokens.push(number);
      at = number.to;
      continue;
    }
    const named = match(word, text, at);
    if (named) {
      const name = named.text.replace(/[-.]+$/, "");
      const known = notDecimal(name, at);
      if (known) return known;
      tokens.push({ type: "name", name, from: at, to: at + name.length });
      at += name.length;
      continue;
    }
    const infinite = match(/\.(?:inf|nan)\b/iy, text, at);
    if (infinite) return badNumber(text, at, infinite.to, "is no finite number", "write a number");
    const mixed = match(/\+[-−]|[-−]\+/y, text, at);
    if (mixed) return mixedSigns(mixed.text, at, mixed.to);
    const sign = match(signs, text, at);
    if (!sign) return strange(text, at);
    if (sign.text === "(") brackets.push(tokens.at(-1)?.type === "name");
    if (sign.text === ")") brackets.pop();
    const plain = sign.text === "−" ? "-" : sign.text === "±" ? "+/-" : sign.text === "·" ? "*" : sign.text;
    tokens.push({ type: "sign", sign: plain, from: at, to: sign.to });
    at = sign.to;
  }
  tokens.push({ type: "end", from: text.length, to: text.length });
  return tokens;
}

function match(pattern: RegExp, text: string, at: number): { text: string; to: number } | undefined {
  pattern.lastIndex = at;
  const found = pattern.exec(text);
  return found ? { text: found[0], to: at + found[0].length } : undefined;
}

function readNumber(text: string, from: number, to: number, inCall: boolean): Token | Fault {
  const written = text.slice(from, to);
  const odd = oddNumber(text, from, to, inCall);
  if (odd) return odd;
  const value = Number(written.replace("−", "-"));
  if (!Number.isFinite(value)) return badNumber(text, from, to, "is too large", "write a number below 1e308");
  const next = text.slice(to, to + 1);
  if (/[\p{L}%°℃℉_]/u.test(next)) {
    const end = unitEnd(text, to);
    return {
      code: "space-before-unit",
      from,
      to: end,
      data: { text: text.slice(from, end), fix: `write \`${written} ${text.slice(to, end)}\`` },
    };
  }
  const unitAt = match(/\s+/y, text, to)?.to ?? to;
  if (unitAt === to || !match(unitStart, text, unitAt)) return { type: "number", value, unit: one, from, to };
  const end = unitEnd(text, unitAt);
  const unit = parseUnit(text.slice(unitAt, end));
  if (isUnitFault(unit)) return unitFault(unit, text.slice(unitAt, end), unitAt);
  return { type: "number", value: value * unit.factor + unit.offset, unit, from, to: end };
}

/** Numbers that YAML, other languages or other habits would read otherwise than as plain decimals. */
function oddNumber(text: string, from: number, to: number, inCall: boolean): Fault | undefined {
  const rest = text.slice(from);
  const other = /^0(?:x[\da-f]+|o[0-7]+|b[01]+)\b/i.exec(rest);
  if (other)
    return badNumber(text, from, from + other[0].length, "is not decimal", `write ${decimal(Number(other[0]))}`);
  const grouped = /^\d+(?:_\d+)+(?:\.\d+)?/.exec(rest) ?? /^\d+(?:['’]\d{3})+(?:\.\d+)?/.exec(rest);
  if (grouped) {
    const plain = grouped[0].replace(/[_'’]/g, "");
    return badNumber(text, from, from + grouped[0].length, "has marks between its digits", `write ${plain}`);
  }
  const comma = inCall ? null : /^\d+(?:\.\d+)?(?:,\d+)+(?:\.\d+)?/.exec(rest);
  if (comma) return badNumber(text, from, from + comma[0].length, "has a comma in it", commaFix(comma[0]));
  const spaced = /^\d+(?:[ \u00a0\u202f]\d+)+(?!\/)(?:\.\d+)?\b(?!\/)/.exec(rest);
  if (spaced) {
    const plain = spaced[0].replace(/\s/g, "");
    return badNumber(text, from, from + spaced[0].length, "has a space between its digits", `write ${plain}`);
  }
  if (/^0\d/.test(rest)) {
    const plain = text.slice(from, to).replace(/^0+(?=\d)/, "");
    return badNumber(text, from, to, "begins with a zero, which some programs read as octal", `write ${plain}`);
  }
  const points = /^\d*(?:\.\d+){2,}/.exec(rest);
  if (points) return badNumber(text, from, from + points[0].length, "has two points", "write one decimal point");
  if (text[to] === "." && !/\d/.test(text[to + 1] ?? ""))
    return badNumber(text, from, to + 1, "ends with a point", `write ${text.slice(from, to)}`);
  return undefined;
}

function commaFix(text: string): string {
  const grouped = /^\d{1,3}(?:,\d{3})+(?:\.\d+)?$/.test(text);
  const point = /^\d+,\d+$/.test(text) ? text.replace(",", ".") : undefined;
  const whole = grouped ? text.replace(/,/g, "") : undefined;
  return `write ${[point, whole].filter((x) => x !== undefined).join(" or ") || "one decimal point and nothing else"}`;
}

const decimal = (x: number): string => (Number.isFinite(x) ? String(x) : "a decimal number");

function notDecimal(name: string, from: number): Fault | undefined {
  if (!/^(?:inf|infinity|nan)$/i.test(name)) return undefined;
  return badNumber(name, 0, name.length, "is no finite number", "write a number", from);
}

function badNumber(text: string, from: number, to: number, why: string, fix: string, shift = 0): Fault {
  return { code: "bad-number", from: from + shift, to: to + shift, data: { text: text.slice(from, to), why, fix } };
}

function unitEnd(text: string, from: number): number {
  let at = from;
  if (text.startsWith("1/", at)) at += 2;
  for (let piece = match(unitPiece, text, at); piece; piece = match(unitPiece, text, at)) at = piece.to;
  return at;
}

/** A fault of a unit as a fault of the text that holds it from `shift` on. */
export function unitFault(fault: UnitFault, unit: string, shift: number): Fault {
  const [from, to] = [shift + fault.from, shift + fault.to];
  if (fault.fault === "offset") return { code: "offset-unit", from, to, data: { unit, part: fault.part } };
  if (fault.fault === "malformed")
    return { code: "bad-unit", from: shift, to: shift + Math.max(1, unit.length), data: { unit } };
  return { code: "unknown-unit", from, to, data: { part: fault.part, unit, nearest: fault.nearest } };
}

/** `5 L +- 1 L`: meant as a spread, and as an expression 4 L. */
const mixedSigns = (sign: string, from: number, to: number): Fault => ({
  code: "bad-uncertainty",
  from,
  to,
  data: {
    why: `\`${sign}\` may mean a spread or a minus`,
    fix: "for one standard deviation write `+/-` or `±`, for a minus `-` alone",
  },
});

function strange(text: string, at: number): Fault {
  const c = String.fromCodePoint(text.codePointAt(at) ?? 32);
  const fix =
    c === "[" || c === "{"
      ? "use round brackets"
      : c === "%"
        ? "write a number before it, with one space: 15 %"
        : "take it out; a value is a number with a unit or an expression with + - * / ^, brackets and functions";
  return { code: "bad-expression", from: at, to: at + c.length, data: { why: `\`${c}\` cannot stand here`, fix } };
}
