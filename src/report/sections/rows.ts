import { typeset } from "../../draw/scale.js";
import { formatNumber } from "../../units/format.js";
import { estimateWords } from "../digits.js";
import type { Estimate } from "../input.js";

/** First cell, value with its unit, interval. */
export function estimateRow(name: string, estimate: Estimate): [string, string, string] {
  const { value, interval } = estimateWords(estimate);
  const told = value !== "not estimable" && estimate.unit !== "";
  return [name, told ? `${value}\u2009${typeset(estimate.unit)}` : value, interval];
}

/** A number without an interval, with its unit. */
export const withUnit = (x: number, unit: string): string =>
  unit === "" ? formatNumber(x, 3) : `${formatNumber(x, 3)}\u2009${typeset(unit)}`;

/** Items under the same words, in the order in which these first come. */
export function grouped<T>(list: readonly T[], by: (item: T) => string): readonly (readonly [string, readonly T[]])[] {
  const groups = new Map<string, T[]>();
  for (const item of list) groups.set(by(item), [...(groups.get(by(item)) ?? []), item]);
  return [...groups];
}
