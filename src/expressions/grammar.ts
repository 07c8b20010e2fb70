import { nearest } from "../text/nearest.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import { inUnit, type Unit } from "../units/unit.js";
import type { Expression, Operator, Range } from "./ast.js";
import { type Fault, isFault } from "./fault.js";
import { functions } from "./functions.js";
import { broken, type Reader } from "./reader.js";
import type { Token } from "./scan.js";

const deepest = 200;

type Read = Expression | Fault;

/** A whole expression, by precedence: sums of products of signed powers. */
export function readSum(reader: Reader): Read {
  return readBinary(reader, ["+", "-"], (r) => readBinary(r, ["*", "/"], readSigned));
}

function readBinary(reader: Reader, signs: Operator[], readPart: (r: Reader) => Read): Read {
  let left = readPart(reader);
  while (!isFault(left)) {
    const sign = reader.take(...signs);
    if (!sign) return left;
    const right = readPart(reader);
    if (isFault(right)) return right;
    left = join(sign.sign as Operator, left, right);
  }
  return left;
}

const join = (operator: Operator, left: Expression, right: Expression): Expression => ({
  type: "binary",
  operator,
  left,
  right,
  at: { from: left.at.from, to: right.at.to },
});

/** A minus binds looser than a power: -2^2 is -4. A plus in front means nothing. */
function readSigned(reader: Reader): Read {
  const sign = reader.take("-", "+");
  if (!sign) return readPower(reader);
  if (++reader.depth > deepest) return tooDeep(sign);
  const of = readSigned(reader);
  reader.depth--;
  if (isFault(of)) return of;
  const at = { from: sign.from, to: of.at.to };
  if (sign.sign === "+") return { ...of, at };
  // -5 degC is a temperature below zero, not minus 278.15 K.
  if (of.type === "number" && of.unit.offset !== 0) {
    const value = 2 * of.unit.offset - of.value;
    return value < 0 ? belowAbsoluteZero(of.unit, value, at) : { ...of, value, at };
  }
  return { type: "negate", of, at };
}

function belowAbsoluteZero(unit: Unit, value: number, at: Range): Fault {
  const say = (si: number): string => formatQuantity(si, unit, 6);
  const fix = `write a temperature above ${say(0)}`;
  return { code: "bad-number", ...at, data: { text: say(value), why: "lies below absolute zero", fix } };
}

/** Powers bind from the right, and their exponent may carry a minus: 2^-1, 2^3^2 = 2^9. */
function readPower(reader: Reader): Read {
  const first = reader.peek();
  const base = readAtom(reader);
  if (isFault(base) || !reader.take("^")) return base;
  if (++reader.depth > deepest) return tooDeep(reader.peek());
  const exponent = readSigned(reader);
  reader.depth--;
  if (isFault(exponent)) return exponent;
  return first.type === "number" && first.unit.name !== "" ? unitOrValue(first, exponent) : join("^", base, exponent);
}

/** `2 m ^ 3`: 2 m3 to one reader, 8 m3 to the next. */
function unitOrValue({ value, unit, from }: Extract<Token, { type: "number" }>, exponent: Expression): Fault {
  const { to } = exponent.at;
  const power = exponent.type === "number" && exponent.unit.name === "" ? formatNumber(exponent.value, 12) : undefined;
  const number = formatNumber(inUnit(value, unit), 12);
  const why = `\`^\` after a space may raise the value or only its unit ${unit.name}`;
  const raised = `for the value write \`(${number} ${unit.name})^${power ?? "..."}\``;
  const whole = power === undefined ? "" : `, for the unit \`${number} ${unit.name}^${power}\` without a space`;
  return { code: "bad-power", from, to, data: { why, fix: raised + whole } };
}

function readAtom(reader: Reader): Read {
  const token = reader.next();
  const at = { from: token.from, to: token.to };
  if (token.type === "number") return { type: "number", value: token.value, unit: token.unit, at };
  if (token.type === "name") {
    const next = reader.peek();
    if (next.type === "sign" && next.sign === "(") return readCall(reader, token);
    return Object.hasOwn(functions, token.name)
      ? broken(
          token,
          `\`${token.name}\` is a function`,
          `write \`${token.name}(...)\`, or use another name; a unit has no space inside`,
        )
      : { type: "name", name: token.name, at };
  }
  if (token.type === "sign" && token.sign === "(") {
    if (++reader.depth > deepest) return tooDeep(token);
    const inner = readSum(reader);
    reader.depth--;
    if (isFault(inner)) return inner;
    const close = reader.take(")");
    return close ? { ...inner, at: { from: token.from, to: close.to } } : unclosed(reader.peek(), token);
  }
  if (token.type === "end")
    return broken(token, "the expression ends too early", "write the number or name that is missing");
  return broken(token, `\`${token.sign}\` cannot stand here`, "write a number, a name or a bracket before it");
}

function readCall(reader: Reader, name: Extract<Token, { type: "name" }>): Read {
  const open = reader.next();
  if (++reader.depth > deepest) return tooDeep(open);
  const args: Expression[] = [];
  do {
    const arg = readSum(reader);
    if (isFault(arg)) return arg;
    args.push(arg);
  } while (reader.take(","));
  reader.depth--;
  const close = reader.take(")");
  if (!close) return unclosed(reader.peek(), open);
  const f = Object.hasOwn(functions, name.name) ? functions[name.name] : undefined;
  if (!f) {
    const near = nearest(name.name, Object.keys(functions));
    return { code: "unknown-function", from: name.from, to: name.to, data: { name: name.name, nearest: near } };
  }
  const at = { from: name.from, to: close.to };
  if (args.length < f.least || args.length > f.most)
    return broken(
      at,
      `\`${name.name}\` takes ${f.least} argument${f.least > 1 ? "s" : ""}, not ${args.length}`,
      usage(name.name),
    );
  return { type: "call", name: name.name, args, at };
}

const usage = (name: string): string =>
  name === "step-up" ? "write `step-up(x, at, width)`" : `write \`${name}(x)\` with one expression in the brackets`;

const unclosed = (at: Token, open: Token): Fault =>
  broken(
    at.type === "end" ? open : at,
    at.type === "end" ? "a bracket is never closed" : "a closing bracket is missing before this",
    "write the missing `)`",
  );

const tooDeep = (at: Token): Fault =>
  broken(at, "the brackets are nested too deep", "give parts of it a name under `constants`");
