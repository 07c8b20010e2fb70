import type { Trial } from "../model/trial.js";
import type { Env, Value } from "../model/value.js";
import type { Direction } from "./forward.js";
import { shifted } from "./settings.js";

/** The declared facts of all trials, as a run may move them within their `±`. */
export interface Facts {
  readonly trials: Trial[];
  /** SI by name; what has a value in each trial is here by its name for people. */
  readonly values: Record<string, number>;
  /** By trial, with its own values; made when it is first asked for. */
  ofTrials?: readonly Readonly<Record<string, number>>[];
}

/** A fact with a declared standard deviation: an unknown that its `±` holds near what the file says. */
export interface Held {
  readonly says: string;
  /** Standard deviation, SI. */
  readonly sd: number;
  /** Moves the fact by `by` (SI) from what the file says. */
  move(facts: Facts, by: number): void;
  /** What that moves in a trial, by its index, per SI; nothing where it moves something in another trial only. */
  direction(trial: number): Direction | undefined;
  /** The name that it shifts, where it is one of the network. */
  readonly name?: string;
}

const noNames: ReadonlyMap<string, number> = new Map();

/** A value of a trial with a `±`; nothing where it has none. */
export function heldValue(
  value: Value | undefined,
  trial: number,
  says: string,
  env: Env,
  moves: Omit<Direction, "names">,
  change: (trial: Trial, moved: Value) => Trial,
): Held[] {
  const sd = value?.sd?.(env) ?? 0;
  if (!value || !(sd > 0)) return [];
  const move = (facts: Facts, by: number): void => {
    facts.trials[trial] = change(facts.trials[trial], shifted(value, by));
  };
  const direction = { names: noNames, ...moves };
  return [{ says, sd, move, direction: (t) => (t === trial ? direction : undefined) }];
}
