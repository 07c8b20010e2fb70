import { compile } from "../compile/compile.js";
import { fit } from "../fit/fit.js";
import { networkModel } from "../fit/network-model.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { normalCdf } from "../numerics/distributions.js";
import { type Candidate, candidatesFor } from "./candidates.js";
import { asLogged } from "./expected.js";
import { plannedNoise } from "./noise.js";
import type { Plan } from "./result.js";

/** How well one test would tell a network from its rival. */
export interface TellsApart {
  readonly says: string;
  readonly sort: Candidate["sort"];
  /** Sum over all readings of what the rival, at its best, still misses, in squared standard deviations. */
  readonly difference: number;
  /** Probability that AICc prefers the network, were it the truth. */
  readonly chance: number;
  /** Where and when the rival misses most: s since the injection. */
  readonly at: string;
  readonly time: number;
}

/**
 * Ranks a drafted test and its variations (flow, what a day may set, probes, length) by how far a rival, refitted to what the network
 * would show, still misses it: T-optimality. The network is taken at its values; the rival starts anywhere inside its bounds.
 * @returns the most telling first; a variation that the rival has no place for is left out
 * @see A. C. Atkinson, V. V. Fedorov, Biometrika 62 (1975) 57-70
 */
export function tellApart(network: Network, rival: Network, trial: Trial, plan: Plan, seed = 1): TellsApart[] {
  const origin = trial.injections[0]?.start ?? trial.contents?.begins ?? 0;
  const drafted = asLogged(
    trial,
    plan.readings.map((r) => r.times.map((t) => t + origin)),
    plan.readings.map((r) => r.expected),
  );
  const { plant } = compile(network);
  const model = networkModel(network);
  const [as, ...others] = candidatesFor(network, [drafted], { values: {}, readings: [] });
  const candidates = [{ ...as, says: "the test as drafted" }, ...others];
  return candidates
    .flatMap((c): TellsApart[] => {
      const curves =
        plant &&
        model.respond(
          c.trial,
          {},
          c.times.map((time) => ({ time })),
        );
      if (!curves) return [];
      const logged = asLogged(c.trial, c.times, curves);
      const { fit: found } = fit(rival, [logged], { seed, asItStands: true });
      if (!found || found.readings.length !== curves.length) return [];
      let difference = 0;
      let most = { miss: -1, at: "", time: 0 };
      for (const [k, r] of found.readings.entries()) {
        const peak = curves[k].reduce((m, v) => Math.max(m, v), 0);
        const { sd } = plannedNoise(logged.readings[k], peak);
        for (let i = 0; i < r.residual.length; i++) {
          const miss = (r.residual[i] / sd(r.measured[i])) ** 2;
          difference += miss;
          if (miss > most.miss) most = { miss, at: r.at, time: r.time[i] - origin };
        }
      }
      // Twice the log of the likelihood ratio is normal with this mean and four times the variance (D. R. Cox, J. R. Statist. Soc. B 24
      // (1962) 406-424, for normal errors); each parameter of the rival more costs it two.
      const own = network.names.filter((n) => n.role === "parameter").length;
      const theirs = rival.names.filter((n) => n.role === "parameter").length;
      const z = (difference + 2 * (theirs - own)) / (2 * Math.sqrt(Math.max(difference, 1e-12)));
      return [{ says: c.says, sort: c.sort, difference, chance: normalCdf(z), at: most.at, time: most.time }];
    })
    .sort((a, b) => b.difference - a.difference);
}
