import { type Program, type Slot, Tape } from "../numerics/tape.js";
import { type Expression, namesIn } from "./ast.js";
import { type Compiled, compileExpression } from "./compile.js";
import { differentiate } from "./differentiate.js";
import { recordExpression } from "./record.js";

/** An expression with its derivatives by some of its names, for loops over many cells: numbers go into arrays, none is allocated. */
export interface Law {
  readonly value: Compiled;
  /** Writes the value into out[at]. */
  write(env: ArrayLike<number>, out: Float64Array, at: number): void;
  /** Writes the derivatives by all names of `by`, in their order. */
  gradient(env: ArrayLike<number>, out: Float64Array): void;
  /** Records both on a tape, which has the array of values by slot; undefined where the expression has a kink. */
  record(tape: Tape, env: (slot: number) => Slot): RecordedLaw | undefined;
}

/** Places on a tape. */
export interface RecordedLaw {
  readonly value: Slot;
  /** By name, 0 where the expression does not have it. */
  readonly gradient: readonly Slot[];
}

/**
 * @param by     names; an expression need not have them
 * @param slotOf the slot of a name in the array of values
 * @throws where a name has no slot: parsing and `dimensionOf` come first
 */
export function compileLaw(e: Expression, by: readonly string[], slotOf: (name: string) => number | undefined): Law {
  const used = namesIn(e);
  const slopes = by.flatMap((name, i) => (used.includes(name) ? [{ i, of: differentiate(e, name) }] : []));
  const value = compileExpression(e, slotOf);
  const write = recorded([e], used, slotOf);
  const gradient = recorded(
    slopes.map(({ of }) => of),
    used,
    slotOf,
  );
  const plain = gradient ? [] : slopes.map(({ of }) => compileExpression(of, slotOf));
  const count = by.length;
  return {
    value,
    write(env, out, at) {
      if (write) {
        write.run(env);
        out[at] = write.program.value[write.results[0]];
      } else out[at] = value(env);
    },
    gradient(env, out) {
      for (let i = 0; i < count; i++) out[i] = 0;
      if (gradient) {
        gradient.run(env);
        for (let k = 0; k < slopes.length; k++) out[slopes[k].i] = gradient.program.value[gradient.results[k]];
      } else for (let k = 0; k < slopes.length; k++) out[slopes[k].i] = plain[k](env);
    },
    record(tape, env) {
      const held = (name: string): Slot => env(slotOf(name) ?? Number.NaN);
      const value = recordExpression(tape, e, held);
      if (value === undefined) return undefined;
      const gradient = by.map(() => tape.constant(0));
      for (const { i, of } of slopes) {
        const slope = recordExpression(tape, of, held);
        if (slope === undefined) return undefined;
        gradient[i] = slope;
      }
      return { value, gradient };
    },
  };
}

interface Recorded {
  readonly program: Program;
  readonly results: readonly Slot[];
  run(env: ArrayLike<number>): void;
}

/** Undefined where one has a kink. */
function recorded(
  expressions: readonly Expression[],
  names: readonly string[],
  slotOf: (name: string) => number | undefined,
): Recorded | undefined {
  const tape = new Tape();
  const places = Int32Array.from(names, (name) => slotOf(name) ?? Number.NaN);
  const inputs = new Map(names.map((name) => [name, tape.input()]));
  const results: Slot[] = [];
  for (const e of expressions) {
    const slot = recordExpression(tape, e, (name) => inputs.get(name));
    if (slot === undefined) return undefined;
    results.push(slot);
  }
  const program = tape.program();
  const x = new Float64Array(places.length);
  return {
    program,
    results,
    run(env) {
      for (let k = 0; k < places.length; k++) x[k] = env[places[k]];
      program.run(x);
    },
  };
}
