import { compile } from "../compile/compile.js";
import { Part, type Plant, type Settings } from "../compile/plant.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { trialResponse } from "../simulate/trial.js";
import type { ForwardModel } from "./forward.js";
import { settingsOfDay } from "./settings.js";

/** The exact tracer response of a network as a forward model. It keeps the plant of the last values asked for. */
export function networkModel(network: Network): ForwardModel {
  let lastSettings: Settings | undefined;
  let last: Plant | undefined;
  const plantFor = (trial: Trial, values: Settings): Plant | undefined => {
    const settings = settingsOfDay(network, trial, values);
    if (settings !== lastSettings) {
      lastSettings = settings;
      const { plant } = compile(network, settings);
      last = plant && network.requires.every((r) => r.slack(plant.env) >= 0) ? plant : undefined;
    }
    return last;
  };
  return {
    respond: (trial, values, wanted) => {
      const plant = plantFor(trial, values);
      return plant && trialResponse(plant, trial, wanted);
    },
    delays: (trial, values) => {
      const plant = plantFor(trial, values);
      const tubes = plant?.nodes.filter((n) => n.part === Part.Delay) ?? [];
      return tubes.map((n) => (n.inflow > 0 ? n.volume / n.inflow : Number.POSITIVE_INFINITY));
    },
  };
}
