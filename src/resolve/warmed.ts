import { type Expression, namesIn } from "../expressions/ast.js";
import { compileExpression } from "../expressions/compile.js";
import { differentiate } from "../expressions/differentiate.js";
import type { ChemicalConstant } from "../model/chemistry.js";
import type { Env } from "../model/value.js";

/** d/dT of each constant by the chain rule over those that it is made of; undefined where it does not follow the temperature. */
export function warmedConstants(
  constants: readonly ChemicalConstant[],
  order: readonly number[],
  slotOf: (name: string) => number | undefined,
): (ChemicalConstant["warmed"] | undefined)[] {
  const warmed: ChemicalConstant["warmed"][] = constants.map(() => undefined);
  const isWarm = (name: string): boolean => warmed[constants.findIndex((c) => c.name === name)] !== undefined;
  for (const i of order) {
    const { expression } = constants[i].value;
    warmed[i] = withTemperature(expression, constants.map((c) => c.name).filter(isWarm), constants, slotOf);
  }
  return warmed;
}

/**
 * d/dT of an expression, with those of constants that follow the temperature handed in by their index; undefined where it
 * asks neither for `T` nor for any of them.
 * @param warm names of constants that follow the temperature
 */
export function withTemperature(
  expression: Expression,
  warm: readonly string[],
  constants: readonly { readonly name: string }[],
  slotOf: (name: string) => number | undefined,
): ((env: Env, others: ArrayLike<number>) => number) | undefined {
  const used = namesIn(expression);
  const slope = (name: string) => compileExpression(differentiate(expression, name), slotOf);
  const direct = used.includes("T") ? slope("T") : undefined;
  const through = warm
    .filter((name) => used.includes(name))
    .map((name) => ({ index: constants.findIndex((c) => c.name === name), slope: slope(name) }));
  if (!direct && through.length === 0) return undefined;
  return (env, others) => {
    let sum = direct ? direct(env) : 0;
    for (const { index, slope: by } of through) sum += by(env) * others[index];
    return sum;
  };
}
