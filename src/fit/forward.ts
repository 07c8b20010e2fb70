import type { Settings } from "../compile/plant.js";
import type { Trial } from "../model/trial.js";

/** When a curve is wanted: one list of times per reading of a trial, s on the trial's clock. */
export type WantedTimes = readonly { readonly time: Float64Array }[];

/** A direction in which one trial and its vessel move, per unit of t. All SI. */
export interface Direction {
  /** Names of the network that move, and what the day of the trial set otherwise. */
  readonly names: ReadonlyMap<string, number>;
  readonly day?: ReadonlyMap<string, number>;
  /** Amount or level of an injection, by its index. */
  readonly dose?: { readonly injection: number; readonly slope: number };
  /** Sample line of a reading, by its index: s. */
  readonly line?: { readonly reading: number; readonly delay: number; readonly lag: number };
  /** The trial moved by so much, where nothing of the above says how. */
  readonly changed?: (trial: Trial, by: number) => Trial;
}

/** Values of names: what is set, and which of that follow their own expressions but for a shift. */
export interface At {
  readonly values: Settings;
  readonly shifted: ReadonlySet<string>;
}

/** Curves of a trial with their derivatives by direction; a direction in which there is none is left out. */
export interface Sloped {
  readonly curves: readonly Float64Array[];
  readonly slopes: readonly (readonly Float64Array[] | undefined)[];
}

/** What a fit asks of the vessel. The fit knows nothing else of it. */
export interface ForwardModel {
  /** Names trials that will be asked for again and again. */
  keep?(trials: readonly Trial[]): void;
  /**
   * Modelled concentration (SI) of every reading of a trial at the wanted times, without baseline.
   * @param values  names set otherwise than in the file, SI
   * @returns undefined where these values make no vessel: a negative volume or flow, a share over 100 %, a broken `requires:`
   */
  respond(trial: Trial, values: Settings, wanted: WantedTimes): readonly Float64Array[] | undefined;
  /** The same with exact derivatives; undefined also where the model has none for such a vessel or trial. */
  slopes?(trial: Trial, at: At, wanted: WantedTimes, directions: readonly Direction[]): Sloped | undefined;
  /** Transport delays of the tubes of the vessel, s, always in the same order; empty where there are none or no vessel. */
  delays(trial: Trial, values: Settings): readonly number[];
}
