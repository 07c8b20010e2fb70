import type { Plant } from "../compile/plant.js";
import { broughtTo } from "../compile/through.js";
import type { Report } from "../problems/report.js";
import { dimensions } from "../units/dimension.js";
import { formatNumber, formatQuantity } from "../units/format.js";

/** From this many times the through-flow on, two tanks differ by about a hundredth of what enters: one zone to any probe. */
const oneZone = 100;

/** Warns of exchanges so fast that the two tanks are one. Where no stream passes either, the feed of the vessel is the measure. */
export function fastExchanges(plant: Plant, report: Report): void {
  const feed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const unit = plant.network.units.unitFor(dimensions.flow);
  for (const c of plant.network.compartments) {
    for (const e of c.exchanges) {
      const flow = e.flow.of(plant.env);
      const passing = Math.max(broughtTo(plant, c.name), broughtTo(plant, e.partner)) || feed;
      if (passing === 0 || flow <= oneZone * passing) continue; // a closed vessel has no measure for it
      report("exchange-fast", e.flow.at, {
        name: c.name,
        partner: e.partner,
        flow: formatQuantity(flow, unit, 6),
        times: formatNumber(flow / passing, 3),
      });
    }
  }
}
