import type { Plant } from "../../compile/plant.js";
import { partingsOf } from "../../compile/sends.js";
import { dimensions } from "../../units/dimension.js";
import { bodiesOf, vesselOf } from "../vessel.js";
import { type QuantityJson, quantity } from "./quantity.js";

/** Solved flows, volumes and space times. An exchange is under `a<>b`: equal flow both ways. */
export function networkJson(plant: Plant): object {
  const { units } = plant.network;
  const flow = (q: number): QuantityJson => quantity(q, units.unitFor(dimensions.flow));
  const volume = (v: number): QuantityJson => quantity(v, units.unitFor(dimensions.volume));
  const bodies = bodiesOf(plant);
  const vessel = vesselOf(plant);
  return {
    flows: Object.fromEntries(
      plant.streams.map((s) => [`${s.leaves}${s.role === "exchange" ? "<>" : ">"}${s.enters}`, flow(s.flow)]),
    ),
    volumes: Object.fromEntries(bodies.map((b) => [b.name, volume(b.volume)])),
    spaceTimes: Object.fromEntries(bodies.map((b) => [b.name, quantity(b.spaceTime, units.time)])),
    ...sendsJson(plant),
    vessel: {
      volume: volume(vessel.volume),
      active: volume(vessel.active),
      dead: volume(vessel.dead),
      feed: flow(vessel.feed),
      meanTime: quantity(vessel.meanTime, units.time),
    },
  };
}

/** By substance that divides otherwise than the liquid, the share of it that each stream takes. */
function sendsJson(plant: Plant): { sends?: Record<string, Record<string, number>> } {
  const sends: Record<string, Record<string, number>> = {};
  for (const { of, from, to, share } of partingsOf(plant)) {
    sends[of] ??= {};
    sends[of][`${from}>${to}`] = share;
  }
  return Object.keys(sends).length > 0 ? { sends } : {};
}
