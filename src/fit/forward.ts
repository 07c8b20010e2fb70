import type { Settings } from "../compile/plant.js";
import type { Trial } from "../model/trial.js";

/** When a curve is wanted: one list of times per reading of a trial, s on the trial's clock. */
export type WantedTimes = readonly { readonly time: Float64Array }[];

/** What a fit asks of the vessel. The fit knows nothing else of it. */
export interface ForwardModel {
  /**
   * Modelled concentration (SI) of every reading of a trial at the wanted times, without baseline.
   * @param values  names set otherwise than in the file, SI
   * @returns undefined where these values make no vessel: a negative volume or flow, a share over 100 %, a broken `requires:`
   */
  respond(trial: Trial, values: Settings, wanted: WantedTimes): readonly Float64Array[] | undefined;
  /** Transport delays of the tubes of the vessel, s, always in the same order; empty where there are none or no vessel. */
  delays(trial: Trial, values: Settings): readonly number[];
}
