import { type Expression, visit } from "./ast.js";
import { call, difference, is, negative, number, power, product, quotient, sum } from "./build.js";
import { functionNamed } from "./functions.js";

/**
 * The derivative with respect to one name, simplified, per SI unit of that name: compiled, it is exact to rounding.
 * Other names count as constants; whoever lets names depend on names applies the chain rule over them.
 */
export function differentiate(e: Expression, name: string): Expression {
  let found = false;
  visit(e, (part) => {
    found ||= part.type === "name" && part.name === name;
  });
  if (!found) return number(0);
  switch (e.type) {
    case "number":
      return number(0);
    case "name":
      return number(1);
    case "negate":
      return negative(differentiate(e.of, name));
    case "call": {
      const f = functionNamed(e.name);
      if (!f) throw new Error(`no function ${e.name}`);
      return f.derivative(
        e.args,
        e.args.map((a) => differentiate(a, name)),
      );
    }
    case "binary": {
      const { left: a, right: b } = e;
      const da = differentiate(a, name);
      const db = differentiate(b, name);
      switch (e.operator) {
        case "+":
          return sum(da, db);
        case "-":
          return difference(da, db);
        case "*":
          return sum(product(da, b), product(a, db));
        case "/":
          return difference(quotient(da, b), product(quotient(a, power(b, number(2))), db));
        case "^":
          return sum(
            product(product(b, power(a, difference(b, number(1)))), da),
            is(db, 0) ? number(0) : product(product(e, call("log", a)), db),
          );
      }
    }
  }
}
