import type { Plant } from "../compile/plant.js";
import { broughtTo } from "../compile/through.js";
import type { Report } from "../problems/report.js";
import { dimensions } from "../units/dimension.js";
import { formatNumber, formatQuantity } from "../units/format.js";

/** From this many times the through-flow on, two tanks differ by about a hundredth of what enters: one zone to any probe. */
const oneZone = 100;

/** Warns of exchanges so fast that the two tanks are one. Where no stream passes either, the feed of the vessel is the measure. */
export function fastExchanges(plant: Plant, report: Report): void {
  const pocket = "stagnant.exchange";
  if (plant.network.compartments.every((c) => c.exchanges.length === 0 && !c.values[pocket])) return;
  const through = new Map<string, number>();
  for (const s of plant.streams) if (s.role !== "exchange") through.set(s.to, (through.get(s.to) ?? 0) + s.flow);
  const into = (name: string): number => through.get(name) ?? broughtTo(plant, name);
  const feed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const unit = plant.network.units.unitFor(dimensions.flow);
  for (const c of plant.network.compartments) {
    const stagnant = c.values[pocket];
    const own = stagnant?.of(plant.env) ?? 0;
    const each = own / (c.counts.repeat ?? 1); // every tank of a row has its share of them
    const passed = into(c.name) || feed;
    if (stagnant && passed > 0 && each > oneZone * passed) {
      const text = { name: c.name, flow: formatQuantity(own, unit, 6), times: formatNumber(each / passed, 3) };
      report("stagnant-fast", stagnant.at, text);
    }
    for (const e of c.exchanges) {
      const flow = e.flow.of(plant.env);
      const passing = Math.max(into(c.name), into(e.partner)) || feed;
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
