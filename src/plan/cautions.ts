import { isClosed, type Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";

/** What whoever does the test must hear, in plain words. */
export function cautionsOf(network: Network, trial: Trial): string[] {
  const amount = trial.injections[0]?.form;
  const active =
    trial.tracer?.decay !== undefined ||
    trial.readings.some((r) => r.noise?.counting) ||
    (amount?.is === "pulse" && /Bq/.test(amount.amount.unit?.name ?? ""));
  return [
    "Use only a tracer that the operator, the regulator and the owner of the product allow in writing. Salt and lithium can harm plants, fish, biomass and products; dyes colour discharges.",
    "Drinking water: only tracers approved for it, at the level approved there. Disinfection credit: the regulator's own tracer method, flows and points count, not this plan.",
    ...(active
      ? [
          "Radioactive tracer: licensed people only. Dose, exclusion zone, transport, waste and decay are theirs to plan; nothing here permits a dose.",
        ]
      : []),
    ...(isClosed(network)
      ? []
      : [
          "Where the plant brings tracer round again, measure the inlet, too, and wait for five turns of the loop before repeating.",
        ]),
    "The result holds for the flow, level, temperature and season of the test only. Log the flow at least fifty times per mean residence time; it should be steady within 5 %.",
    "Confined spaces, sampling under pressure and hot or corrosive liquids are the site's own rules.",
  ];
}
