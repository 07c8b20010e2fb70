import type { Plant } from "../compile/plant.js";
import type { DutySettings } from "./conditions.js";
import type { SteadyState } from "./summary.js";

/** One input of a duty in a vessel that runs through a range. SI. */
export interface Along {
  readonly from: number;
  readonly to: number;
  /** The plant at a value; undefined where it does not balance. */
  plantAt(value: number): Plant | undefined;
  /** What the duty has in place of its values. */
  settingsAt(value: number): DutySettings;
}

export interface BranchPoint {
  /** Of the input, SI. */
  readonly at: number;
  readonly state: SteadyState;
  readonly stable: boolean | undefined;
}

/** Where something happens to a steady state as the input goes on. */
export interface Turn {
  /** Of the input, SI. */
  readonly at: number;
  /**
   * `ignites`, `goes out`: a stable state ends, and the next is hotter, colder; `ends`: without heat, or where it is not known
   * which side is stable; `swings`: it stays, but begins to swing; `gives way`: it stays, but any disturbance leads to another;
   * `washes out`: what keeps itself going in the vessel (`of`) goes to nothing.
   */
  readonly what: "ignites" | "goes out" | "ends" | "swings" | "gives way" | "washes out";
  /** Of `washes out`: the species. */
  readonly of?: string;
  /** Whether it happens as the input rises or falls. */
  readonly as: "rises" | "falls";
  readonly state: SteadyState;
  /** Where on its branch: the number of the branch, and of its point, or of the one before. */
  readonly branch: number;
  readonly point: number;
}

export interface Branches {
  /** Steady states in the order in which they follow one another. */
  readonly branches: readonly (readonly BranchPoint[])[];
  readonly turns: readonly Turn[];
  /** What could not be followed, in words. */
  readonly left: readonly string[];
}
