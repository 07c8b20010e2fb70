import type { Turn } from "../reaction/branches.js";
import type { Input } from "./inputs.js";
import { followable } from "./jumps.js";
import { noRow, type Operation } from "./operate.js";
import type { OtherStates } from "./other-states.js";
import { statesAlong } from "./states-along.js";

/** Where what keeps itself going in the vessel goes to nothing as an input moves. */
export interface WashOutFound {
  /** Of the input, SI. */
  readonly at: number;
  readonly of: string;
  readonly as: Turn["as"];
}

/**
 * Wash-outs over a range of one input (SI). No figure need jump there: what is left of it goes to nothing by and by.
 * @param others states found at values of the input: followed only where one of them lacks what another holds
 */
export function washOutsAlong(
  operation: Operation,
  input: Input,
  ends: readonly [number, number],
  others: readonly OtherStates[],
): WashOutFound[] {
  const possible = others.some((o) => o.states.some((s) => s.without.length > 0));
  if (!possible || !followable(operation, noRow)) return [];
  return statesAlong(operation, input, ends).turns.flatMap(({ at, what, of, as }) =>
    what === "washes out" && of !== undefined ? [{ at, of, as }] : [],
  );
}
