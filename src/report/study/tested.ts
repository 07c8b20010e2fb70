import type { Study } from "../../model/study.js";
import { formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";

/** Flows that were tested, and duties that go beyond them. */
export function testedFlows(study: Study): { lines: string[]; extrapolated: string[] } {
  const network = study.rivals[0]?.network;
  if (!network) return { lines: [], extrapolated: [] };
  const lines: string[] = [];
  const extrapolated: string[] = [];
  for (const feed of network.feeds) {
    const unit = feed.flow.unit as Unit;
    const usual = feed.flow.of(new Float64Array(network.names.length));
    const say = (q: number) => formatQuantity(q, unit, 4);
    const tested = study.trials.map((t) => ({ t, flow: t.flows.get(feed.name)?.of([]) ?? usual }));
    for (const { t, flow } of tested) lines.push(`${t.title}: ${feed.name} at ${say(flow)}`);
    if (tested.length === 0) continue;
    const flows = tested.map((x) => x.flow);
    const [low, high] = [Math.min(...flows), Math.max(...flows)];
    for (const d of study.duties) {
      const flow = d.flows.get(feed.name)?.value.of([]) ?? usual;
      // A flow within 1 % of a tested one counts as tested: meters read no better.
      if (flow > high * 1.01) extrapolated.push(`${d.title}: ${feed.name} ${say(flow)}, tested up to ${say(high)}`);
      else if (flow < low * 0.99)
        extrapolated.push(`${d.title}: ${feed.name} ${say(flow)}, tested down to ${say(low)}`);
    }
  }
  return { lines, extrapolated };
}
