import type { UnitBook } from "../../model/network.js";
import type { RegulatedFigures } from "../../reaction/regulated.js";
import { contactTimeUnit, regulatedCaution } from "../../report/study/regulated-words.js";
import { dimensions } from "../../units/dimension.js";
import { pure, quantity } from "./quantity.js";

/** Figures of a regulator's contact-time method, apart from every prediction. */
export function regulatedJson(figures: RegulatedFigures, units: UnitBook): Record<string, unknown> {
  const { outlet, volume, flow, detention, t10, from, bafflingFactor, ct, credits } = figures;
  return {
    at: outlet,
    volume: quantity(volume, units.unitFor(dimensions.volume)),
    flow: quantity(flow, units.unitFor(dimensions.flow)),
    theoreticalTime: quantity(detention, units.time),
    t10: { ...quantity(t10, units.time, "not-estimable"), from },
    bafflingFactor: pure(bafflingFactor),
    ct: ct === undefined ? null : quantity(ct, contactTimeUnit),
    credits: credits.map((c) => ({
      name: c.name,
      credit: pure(c.credit),
      ratio: pure(c.ratio),
      declared: { log: c.log, ct: quantity(c.asked, contactTimeUnit) },
    })),
    caution: regulatedCaution,
  };
}
