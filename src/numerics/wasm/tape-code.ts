import type { Slot, Step } from "../tape.js";
import { type Code, f64, type Variable } from "./assembler.js";

/**
 * A recorded calculation as code: what each result is made of, shared parts once, constants read from memory so that the same code
 * serves other numbers.
 * @param line     its operations
 * @param results  slots that are wanted
 * @param input    code of an input
 * @param constant code of the k-th constant of `constantsOf(line)`
 * @param local    makes a variable
 * @returns what sets the variables, and the code of each result behind it
 */
export function tapeCode(
  line: readonly Step[],
  results: readonly Slot[],
  input: (k: number) => Code,
  constant: (k: number) => Code,
  local: () => Variable,
): { readonly sets: Code[]; readonly results: Code[] } {
  const wanted = new Uint8Array(line.length);
  for (const slot of results) wanted[slot] = 1;
  for (let i = line.length - 1; i >= 0; i--) {
    const { does, a, b } = line[i];
    if (wanted[i] === 0 || does === "constant" || does === "input") continue;
    wanted[a] = 1;
    wanted[b] = 1;
  }
  const of: Code[] = [];
  const sets: Code[] = [];
  let constants = 0;
  line.forEach(({ does, a, b }, i) => {
    if (does === "constant") {
      of.push(constant(constants++));
      return;
    }
    if (wanted[i] === 0 || does === "input") {
      of.push(does === "input" ? input(a) : []);
      return;
    }
    const operation = { add: f64.add, subtract: f64.sub, multiply: f64.mul, divide: f64.div }[does];
    const held = local();
    sets.push(held.set(operation(of[a], of[b])));
    of.push(held.get);
  });
  return { sets, results: results.map((slot) => of[slot]) };
}

/** Numbers of the constants, in their order. */
export const constantsOf = (line: readonly Step[]): number[] =>
  line.flatMap(({ does, value }) => (does === "constant" ? [value] : []));
