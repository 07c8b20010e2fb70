import type { Compartment, Network } from "../model/network.js";
import type { Slot } from "../numerics/tape.js";
import { kindValues } from "./evaluate.js";
import type { Plant } from "./plant.js";
import { shapeOf } from "./ranges.js";
import type { RecordedFlows } from "./record-flows.js";
import { NotRecorded, type Recorder } from "./recorder.js";
import { type Spelled, spell } from "./spelled.js";

/** How far a recorded number may be from the compiled one, relative. */
const rounding = 1e-11;

/** Records volumes, inflows and flows of a plant's nodes and links, in its own order. */
export function recordBodies(recorder: Recorder, network: Network, plant: Plant, flows: RecordedFlows) {
  const { tape } = recorder;
  const zero = tape.constant(0);
  const volume: Slot[] = network.feeds.map(() => zero);
  const flow: Slot[] = [];
  network.compartments.forEach((c, i) => {
    const body = recordBody(recorder, c, network.feeds.length + i, plant, flows);
    volume.push(...body.volume);
    flow.push(...body.flow);
  });
  volume.push(...network.outlets.map(() => zero));
  flow.push(...flows.streams);
  for (const c of network.compartments) {
    for (const e of c.exchanges) {
      const slot = recorder.value(e.flow);
      recorder.keepPositive(slot, recorder.at(e.flow));
      flow.push(slot, slot);
    }
  }
  const inflow = volume.map(() => zero);
  flow.forEach((q, k) => {
    inflow[plant.to[k]] = tape.add(inflow[plant.to[k]], q);
  });
  network.feeds.forEach((_, i) => {
    inflow[i] = tape.add(inflow[i], flows.through[i]);
  });
  return { volume, inflow, flow };
}

/** What a body is made of follows from its values and flows by sums of fixed parts of them; which, a few trials tell. */
function recordBody(
  recorder: Recorder,
  c: Compartment,
  place: number,
  plant: Plant,
  flows: RecordedFlows,
): { volume: Slot[]; flow: Slot[] } {
  const { tape } = recorder;
  const inputs: { slot: Slot; here: number; set: (to: Setting, x: number) => void }[] = [];
  const given = kindValues(c, plant.env);
  const here: Setting = { values: { ...given.values }, through: flows.throughHere[place] };
  const moving = (slot: Slot, x: number, set: (to: Setting, x: number) => void): void => {
    if (recorder.moves(slot)) inputs.push({ slot, here: x, set });
  };
  for (const key in c.values) {
    const slot = recorder.value(c.values[key]);
    const x = given.values[key];
    const shape = shapeOf(c.kind.keys, key);
    if (key === "volume") recorder.keepPositive(slot, x);
    else if (shape?.is === "quantity") {
      for (const limit of [shape.atLeast, shape.above]) {
        if (limit !== undefined) recorder.keepPositive(tape.subtract(slot, tape.constant(limit)), x - limit);
      }
    }
    moving(slot, x, (to, v) => {
      to.values[key] = v;
    });
  }
  moving(flows.through[place], here.through, (to, v) => {
    to.through = v;
  });
  const spelled = (inputsAt: (k: number) => number): Spelled => {
    const at: Setting = { values: { ...here.values }, through: here.through };
    for (const [k, input] of inputs.entries()) input.set(at, inputsAt(k));
    return spell(c, { ...given, values: at.values }, at.through, undefined);
  };
  const actual = spelled((k) => inputs[k].here);
  if (actual.blocks.length > 0) throw new NotRecorded();
  // Tried at ones and twos, not where it happens to be: so it is the same wherever it is recorded.
  const ones = spelled(() => 1);
  const twos = inputs.map((_, k) => spelled((j) => (j === k ? 2 : 1)));
  const uneven = spelled((k) => 1 + 1 / (k + 1.7));
  for (const s of [ones, ...twos, uneven]) {
    const same = s.volume.length === actual.volume.length && s.flow.length === actual.flow.length;
    if (!same || s.part.some((p, i) => p !== actual.part[i])) throw new NotRecorded();
  }
  const numbers = (of: "volume" | "flow"): Slot[] =>
    ones[of].map((x, i) => {
      let sum = tape.constant(0);
      let [left, expected] = [x, x];
      for (const [k, { slot }] of inputs.entries()) {
        const gain = twos[k][of][i] - x;
        if (Math.abs(gain) <= rounding * Math.abs(x)) continue;
        left -= gain;
        expected += gain / (k + 1.7);
        sum = tape.add(sum, tape.multiply(tape.constant(gain), slot));
      }
      if (!(Math.abs(uneven[of][i] - expected) <= rounding * Math.abs(expected))) throw new NotRecorded();
      if (Math.abs(left) > rounding * Math.abs(x)) sum = tape.add(sum, tape.constant(left));
      recorder.keepPositive(sum, actual[of][i]);
      return sum;
    });
  return { volume: numbers("volume"), flow: numbers("flow") };
}

interface Setting {
  readonly values: Record<string, number>;
  through: number;
}
