import { checkDuty } from "../check/duty.js";
import type { Network } from "../model/network.js";
import { parseDuty } from "../parse/duty.js";
import { collector } from "../problems/report.js";
import { networkSettings } from "../reaction/conditions.js";
import { predict } from "../reaction/prediction.js";
import type { Context } from "./context.js";
import { steadyJson } from "./json/steady.js";
import type { Outcome } from "./outcome.js";
import { plantAt } from "./plant.js";
import { settingsFrom } from "./settings.js";
import type { SimulateOptions } from "./simulate-options.js";
import { steadyText } from "./text/steady.js";

/** `simulate --duty`: the steady state of one operating point. */
export function simulateDuty(network: Network, options: SimulateOptions, { inputs }: Context): Outcome {
  const duty = inputs.document(options.duty ?? "", parseDuty);
  const { report, problems } = collector();
  checkDuty(network, duty, report);
  inputs.accept(problems);
  const plant = plantAt(network, { ...networkSettings(duty), ...settingsFrom(network, options.set) });
  const prediction = predict(plant, duty);
  const { state: steady } = prediction;
  const { worst } = steady;
  return {
    status: steady.converged ? 0 : 3,
    text: steadyText(plant, duty, prediction),
    json: { ok: steady.converged, duty: duty.title, ...steadyJson(plant, duty, prediction) },
    notes: steady.converged
      ? []
      : [
          `backmix: the steady state did not converge${worst ? `, worst for ${worst.species} in ${worst.node}` : ""}; the best found is printed`,
        ],
  };
}
