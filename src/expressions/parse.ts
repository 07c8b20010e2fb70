import { dimensions, sameDimension } from "../units/dimension.js";
import { isUnitFault, parseUnit } from "../units/parse.js";
import type { Unit } from "../units/unit.js";
import type { Comparison, Expression, Uncertainty, WrittenValue } from "./ast.js";
import { type Fault, isFault } from "./fault.js";
import { readSum } from "./grammar.js";
import { broken, Reader } from "./reader.js";
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

/** Numbers, names and signs in one value: more would make trees too deep to walk. */
const longest = 2000;

const comparisons = ["<", "<=", ">", ">="] as const;

function whole<T extends object>(text: string, read: (reader: Reader) => T | Fault): T | Fault {
  const tokens = scan(text);
  if (isFault(tokens)) return tokens;
  if (tokens.length > longest)
    return broken(
      { from: 0, to: tokens[0].to },
      `this value is made of more than ${longest} numbers, names and signs`,
      "give parts of it a name under `constants`",
    );
  const reader = new Reader(tokens);
  const result = read(reader);
  if (isFault(result)) return result;
  const rest = reader.peek();
  return rest.type === "end" ? result : afterEnd(rest, reader);
}

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
