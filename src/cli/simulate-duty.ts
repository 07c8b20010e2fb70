import { checkDuty } from "../check/duty.js";
import type { Settings } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { parseDuty } from "../parse/duty.js";
import { collector } from "../problems/report.js";
import { steadyState } from "../reaction/steady.js";
import type { Context } from "./context.js";
import { steadyJson } from "./json/steady.js";
import type { Outcome } from "./outcome.js";
import { settingsFrom } from "./settings.js";
import type { SimulateOptions } from "./simulate.js";
import { steadyText } from "./text/steady.js";

/** `simulate --duty`: the steady state of one operating point. */
export function simulateDuty(network: Network, options: SimulateOptions, { inputs }: Context): Outcome {
  const duty = inputs.document(options.duty ?? "", parseDuty);
  const { report, problems } = collector();
  checkDuty(network, duty, report);
  inputs.accept(problems);
  const plant = inputs.plant(network, { ...settingsOfDuty(duty), ...settingsFrom(network, options.set) });
  const steady = steadyState(plant, duty.chemistry, duty);
  const { worst } = steady;
  return {
    status: steady.converged ? 0 : 3,
    text: steadyText(plant, duty, steady),
    json: { ok: steady.converged, duty: duty.title, ...steadyJson(plant, duty, steady) },
    notes: steady.converged
      ? []
      : [
          `backmix: the steady state did not converge${worst ? `, worst for ${worst.species} in ${worst.node}` : ""}; the best found is printed`,
        ],
  };
}

/** What a duty sets otherwise in the vessel: flows, and constants of the network. */
function settingsOfDuty(duty: Duty): Settings {
  const settings: Record<string, number> = {};
  for (const [feed, { value }] of duty.flows) settings[`${feed}.flow`] = value.of([]);
  for (const [name, { value }] of duty.settings) settings[name] = value.of([]);
  return settings;
}
