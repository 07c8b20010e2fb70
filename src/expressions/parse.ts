import { nearest } from "../text/nearest.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import { isUnitFault, parseUnit } from "../units/parse.js";
import type { Unit } from "../units/unit.js";
import type { Comparison, Expression, Operator, Uncertainty, WrittenValue } from "./ast.js";
import { type Fault, isFault } from "./fault.js";
import { functions } from "./functions.js";
import { scan, type Token, unitFault } from "./scan.js";

/** Reads an expression: a rate law, a share, a bound. No `±`. */
export function parseExpression(text: string): Expression | Fault {
  return whole(text, (reader) => {
    const e = readSum(reader);
    const next = reader.peek();
    if (next.type === "sign" && next.sign === "+/-")
      return broken(next, "`±` has no meaning here", "take the `±` and what follows out");
    return e;
  });
}

/** Reads a whole value: an expression, and its `±` or `+/-` where it has one. */
export function parseValue(text: string): WrittenValue | Fault {
  return whole<WrittenValue>(text, (reader) => {
    const expression = readSum(reader);
    if (isFault(expression)) return expression;
    const sign = reader.peek();
    if (sign.type !== "sign" || sign.sign !== "+/-") return { expression };
    reader.next();
    const uncertainty = readUncertainty(reader, sign, expression);
    return isFault(uncertainty) ? uncertainty : { expression, uncertainty };
  });
}

/** Reads what physics requires: two expressions with one of `<`, `<=`, `>`, `>=` between them. */
export function parseComparison(text: string): Comparison | Fault {
  return whole<Comparison>(text, (reader) => {
    const left = readSum(reader);
    if (isFault(left)) return left;
    const sign = reader.next();
    const operator = sign.type === "sign" ? comparisons.find((c) => c === sign.sign) : undefined;
    if (!operator) return broken(sign, "a comparison is wanted", "write two sides, like `riser + stagnant < total`");
    const right = readSum(reader);
    return isFault(right) ? right : { left, operator, right };
  });
}

/** Reads a unit on its own, as beside the column of a table; the fault is worded like those of values. */
export function parseWrittenUnit(text: string): Unit | Fault {
  const unit = parseUnit(text);
  return isUnitFault(unit) ? unitFault(unit, text, 0) : unit;
}

const comparisons = ["<", "<=", ">", ">="] as const;
const deepest = 200;

class Reader {
  #at = 0;
  depth = 0;
  constructor(readonly tokens: readonly Token[]) {}
  peek(): Token {
    return this.tokens[this.#at];
  }
  next(): Token {
    return this.tokens[this.#at < this.tokens.length - 1 ? this.#at++ : this.#at];
  }
  /** Takes a sign where it comes next. */
  take(...signs: string[]): Extract<Token, { type: "sign" }> | undefined {
    const token = this.peek();
    if (token.type !== "sign" || !signs.includes(token.sign)) return undefined;
    this.next();
    return token;
  }
}

function whole<T extends object>(text: string, read: (reader: Reader) => T | Fault): T | Fault {
  const tokens = scan(text);
  if (isFault(tokens)) return tokens;
  const reader = new Reader(tokens);
  const result = read(reader);
  if (isFault(result)) return result;
  const rest = reader.peek();
  return rest.type === "end" ? result : afterEnd(rest, reader);
}

type Read = Expression | Fault;

function readSum(reader: Reader): Read {
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
  if (of.type === "number" && of.unit.offset !== 0) return { ...of, value: 2 * of.unit.offset - of.value, at };
  return { type: "negate", of, at };
}

/** Powers bind from the right, and their exponent may carry a minus: 2^-1, 2^3^2 = 2^9. */
function readPower(reader: Reader): Read {
  const base = readAtom(reader);
  if (isFault(base) || !reader.take("^")) return base;
  if (++reader.depth > deepest) return tooDeep(reader.peek());
  const exponent = readSigned(reader);
  reader.depth--;
  return isFault(exponent) ? exponent : join("^", base, exponent);
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

/** Own unit or not? Only a lone number in % has % for its own unit; beside anything else % means relative. */
function readUncertainty(reader: Reader, sign: Token, of: Expression): Uncertainty | Fault {
  const token = reader.next();
  const wrong = (why: string, fix: string): Fault => ({
    code: "bad-uncertainty",
    from: sign.from,
    to: Math.max(token.to, sign.to),
    data: { why, fix },
  });
  if (token.type !== "number")
    return wrong("no number follows `±`", "write one standard deviation, like `1000 L ± 20 L` or `1000 L ± 2 %`");
  if (token.unit.offset !== 0) return wrong("a spread of temperatures is in K", "write it in K, like `35 degC ± 1 K`");
  const at = { from: sign.from, to: token.to };
  const literal = of.type === "negate" ? of.of : of;
  const percent = token.unit.name === "%";
  if (percent && literal.type === "number" && sameDimension(literal.unit.dimension, dimensions.temperature))
    return wrong("a spread in % of a temperature has no meaning", "write it in K, like `35 degC ± 1 K`");
  const own = literal.type === "number" && literal.unit.name === "%";
  const kind = percent && !own ? "relative" : "absolute";
  return { kind, value: token.value, unit: token.unit, at };
}

function afterEnd(token: Token, reader: Reader): Fault {
  const before = reader.tokens[reader.tokens.indexOf(token) - 1];
  if (token.type === "sign" && token.sign === "+/-")
    return {
      code: "bad-uncertainty",
      from: token.from,
      to: token.to,
      data: { why: "`±` stands twice", fix: "leave one" },
    };
  if (token.type === "sign") {
    const why = token.sign === ")" ? "a bracket closes that never opened" : `\`${token.sign}\` cannot stand here`;
    const fix =
      token.sign === ","
        ? "write a decimal point; commas separate arguments only"
        : "take it out, or write what belongs before it";
    return broken(token, why, fix);
  }
  const fix =
    before?.type === "name" || token.type === "name"
      ? "write the operator that is missing; a unit stands after a number and has no space inside"
      : "write the operator that is missing";
  return broken(token, "two things stand side by side with nothing between them", fix);
}

const broken = (at: { from: number; to: number }, why: string, fix: string): Fault => ({
  code: "bad-expression",
  from: at.from,
  to: at.to,
  data: { why, fix },
});

const unclosed = (at: Token, open: Token): Fault =>
  broken(
    at.type === "end" ? open : at,
    at.type === "end" ? "a bracket is never closed" : "a closing bracket is missing before this",
    "write the missing `)`",
  );

const tooDeep = (at: Token): Fault =>
  broken(at, "the brackets are nested too deep", "give parts of it a name under `constants`");
