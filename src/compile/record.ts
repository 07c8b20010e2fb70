import { followedIn, isClosed, type Network } from "../model/network.js";
import type { Slot } from "../numerics/tape.js";
import type { FlowPlan } from "./flows.js";
import type { Plant, Settings } from "./plant.js";
import { recordBodies } from "./record-bodies.js";
import { recordFlows } from "./record-flows.js";
import { type FactInputs, NotRecorded, type OnDay, Recorder, recorded, type WhyNot } from "./recorder.js";

/** A plant whose numbers are places on a tape: the same structure at other values, without compiling again. */
export interface RecordedPlant {
  readonly recorder: Recorder;
  /** As it was compiled where it was recorded. */
  readonly plant: Plant;
  /** m3 and m3/s, by node. */
  readonly volume: readonly Slot[];
  readonly inflow: readonly Slot[];
  /** m3/s, by link. */
  readonly flow: readonly Slot[];
}

/**
 * Records how a plant's numbers follow from the names that are set. The recording is the same wherever it is made.
 * @param plant  compiled with `settings` and what the day sets
 * @param onDay  names that the day of a trial sets to values made of the network's names, before facts move them
 * @param facts  inputs besides the names: facts that may be moved, and by how much `plant` has them moved
 * @returns why not, where it cannot be: tables of zones, formulas with kinks, substances that divide by themselves
 */
export function recordPlant(
  network: Network,
  plan: FlowPlan,
  plant: Plant,
  settings: Settings,
  onDay: readonly OnDay[],
  facts: FactInputs = new Map(),
): RecordedPlant | WhyNot {
  if (isClosed(network) || followedIn(network).length > 0 || network.compartments.some((c) => c.zones)) return "never";
  // Of several inlets of one body each would be an input of its own.
  if (plan.streams.some((s) => s.enters !== undefined)) return "never";
  return recorded(() => {
    const recorder = new Recorder(network, Object.keys(settings), settings, onDay, facts);
    for (const { left, right } of network.requires) {
      const order = recorder.at(left) > recorder.at(right) ? [left, right] : [right, left];
      const [larger, smaller] = order.map((v) => recorder.value(v));
      recorder.keepPositive(recorder.tape.subtract(larger, smaller), recorder.at(order[0]) - recorder.at(order[1]));
    }
    const flows = recordFlows(recorder, network, plan, plant.env);
    const found = { recorder, plant, ...recordBodies(recorder, network, plant, flows) };
    if (!isFaithful(found, settings, facts)) throw new NotRecorded();
    return found;
  });
}

/** How far a recorded number may be from the compiled one, relative. */
const rounding = 1e-11;

/** Does the recording give what was compiled? */
function isFaithful(
  { recorder, plant, volume, inflow, flow }: RecordedPlant,
  settings: Settings,
  facts: FactInputs,
): boolean {
  const program = recorder.tape.program();
  program.run([...recorder.inputs.map((name) => settings[name]), ...facts.values()]);
  const same = (slots: readonly Slot[], x: Float64Array): boolean =>
    slots.length === x.length && slots.every((s, i) => Math.abs(program.value[s] - x[i]) <= rounding * Math.abs(x[i]));
  return same(volume, plant.columns.volume) && same(inflow, plant.columns.inflow) && same(flow, plant.flow);
}
