import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { ForwardModel } from "./forward.js";
import { withKinetics } from "./kinetics.js";
import { networkModel } from "./network-model.js";
import { jointModel, reactingModel } from "./reacting-model.js";

/**
 * The forward model of trials on a network: tracers and reactions, each followed its own way.
 * @returns the network with the parameters of the chemistries among its own, too
 */
export function modelOf(network: Network, trials: readonly Trial[]): { model: ForwardModel; whole: Network } {
  const whole = withKinetics(network, trials);
  const tracer = networkModel(whole);
  return { whole, model: trials.every((t) => !t.reacting) ? tracer : jointModel(tracer, reactingModel(whole)) };
}
