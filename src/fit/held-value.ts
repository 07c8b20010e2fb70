import { factKey, type Trial } from "../model/trial.js";
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

/** The fact that a direction moves; undefined where it is none that recordings know. */
function keyOf({ day, dose, line }: Omit<Direction, "names">): string | undefined {
  if (day) return factKey.day([...day.keys()][0]);
  if (dose) return factKey.dose(dose.injection);
  return line && factKey.line(line.reading, line.delay === 0 ? "lag" : "delay");
}

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
  const key = keyOf(moves);
  const move = (facts: Facts, by: number): void => {
    const before = facts.trials[trial];
    const { moved: _, ...after } = change(before, shifted(value, by));
    const moved = key && { of: before.moved?.of ?? before, by: new Map(before.moved?.by).set(key, by) };
    facts.trials[trial] = moved ? { ...after, moved } : after;
  };
  const direction = { names: noNames, ...moves };
  return [{ says, sd, move, direction: (t) => (t === trial ? direction : undefined) }];
}
