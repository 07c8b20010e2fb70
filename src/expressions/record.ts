import type { Slot, SmoothFunction, Tape } from "../numerics/tape.js";
import type { Expression } from "./ast.js";
import { knownConstants } from "./ast.js";
import { number } from "./build.js";
import { compileExpression } from "./compile.js";
import { differentiate } from "./differentiate.js";

/** Functions with a kink, whose derivative hangs on which way one goes. */
const kinked = new Set(["abs", "min", "max"]);

/**
 * Records an expression on a tape, its names at the given slots.
 * @returns undefined where it has a kink, or a name without a slot
 */
export function recordExpression(
  tape: Tape,
  e: Expression,
  slotOf: (name: string) => Slot | undefined,
): Slot | undefined {
  const record = (part: Expression): Slot | undefined => recordExpression(tape, part, slotOf);
  switch (e.type) {
    case "number":
      return tape.constant(e.value);
    case "name": {
      const known = knownConstants.get(e.name);
      return known ? tape.constant(known.value) : slotOf(e.name);
    }
    case "negate": {
      const a = record(e.of);
      return a === undefined ? undefined : tape.negate(a);
    }
    case "binary": {
      const a = record(e.left);
      const b = record(e.right);
      if (a === undefined || b === undefined) return undefined;
      switch (e.operator) {
        case "+":
          return tape.add(a, b);
        case "-":
          return tape.subtract(a, b);
        case "*":
          return tape.multiply(a, b);
        case "/":
          return tape.divide(a, b);
        case "^":
          if (tape.known(b) === 2) return tape.multiply(a, a);
          return recordCall(tape, [a, b], ([x, y]) => ({ ...e, left: x, right: y }));
      }
      break;
    }
    case "call": {
      const args = e.args.map(record);
      if (args.some((a) => a === undefined)) return undefined;
      if (kinked.has(e.name) && args.some((a) => tape.known(a as Slot) === undefined)) return undefined;
      return recordCall(tape, args as Slot[], (names) => ({ ...e, args: names }));
    }
  }
}

/** An operation as a function of its own, by the names `0`, `1`, … for what does not stay. */
function recordCall(tape: Tape, args: readonly Slot[], of: (names: readonly Expression[]) => Expression): Slot {
  const at = { from: 0, to: 0 };
  const moving = args.filter((a) => tape.known(a) === undefined);
  const whole = of(
    args.map((a): Expression => {
      const value = tape.known(a);
      if (value === undefined) return { type: "name", name: String(moving.indexOf(a)), at };
      return number(value);
    }),
  );
  const compiled = compileExpression(whole, Number);
  const f: SmoothFunction = {
    value: compiled,
    partials: moving.map((_, k) => compileExpression(differentiate(whole, String(k)), Number)),
  };
  return tape.call(f, moving);
}
