import type { Plant } from "../../compile/plant.js";
import type { Fit } from "../../fit/result.js";
import type { Value } from "../../model/value.js";
import { dimensions } from "../../units/dimension.js";
import { parseUnit } from "../../units/parse.js";
import { one, type Unit } from "../../units/unit.js";
import { estimateLine } from "../digits.js";
import { estimate } from "./estimate.js";

/** What a fitted network says of its vessel, in words: each line one trait, the gravest first. */
export interface Traits {
  readonly lines: readonly string[];
  readonly bypass: boolean;
  readonly dead: boolean;
  /** Names and streams (`feed>product`) that carry the traits, for the drawing. */
  readonly places: ReadonlySet<string>;
}

/** Shares smaller than this are not worth a line. */
const worthSaying = 0.002;

/** Bypasses, dead water, quiet corners and recycles of a fitted plant, with intervals where one parameter stands for them. */
export function traitsOf(plant: Plant, fit: Fit): Traits {
  const lines: string[] = [];
  const places = new Set<string>();
  const feed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const percent = unitOf("%");
  const volume = plant.network.units.unitFor(dimensions.volume);
  const outlets = new Set(plant.outlets.map((o) => o.name));
  let bypass = false;
  let dead = false;
  for (const f of plant.network.feeds) {
    const own = plant.feeds.find((p) => p.name === f.name)?.flow ?? feed;
    for (const s of plant.streams.filter((x) => x.from === f.name && outlets.has(x.to))) {
      const split = f.streams.find((x) => x.to === s.to)?.split;
      const share = s.flow / own;
      if (share < worthSaying) continue;
      bypass = true;
      places.add(`${s.from}>${s.to}`);
      const known = split && "value" in split && split.is === "share" ? intervalOf(split.value, fit) : undefined;
      lines.push(`${estimateLine(estimate(share, known, percent))} of '${f.name}' slips past the vessel to '${s.to}'`);
    }
  }
  for (const c of plant.network.compartments) {
    const held = c.values.volume?.of(plant.env) ?? 0;
    const share = held / plant.volume.total;
    const known = c.values.volume && intervalOf(c.values.volume, fit);
    const size = () => `${estimateLine(estimate(held, known, volume))}, ${percentOf(share)} of the volume,`;
    const exchange = plant.streams.filter((s) => s.role === "exchange" && (s.from === c.name || s.to === c.name));
    const passed = plant.streams.some((s) => s.role !== "exchange" && (s.from === c.name || s.to === c.name));
    if (!c.kind.flows && share >= worthSaying) {
      dead = true;
      places.add(c.name);
      lines.push(`${size()} is never reached by the flow ('${c.name}')`);
    } else if (!passed && exchange.length > 0 && share >= worthSaying) {
      places.add(c.name);
      const flow = exchange.reduce((sum, s) => sum + s.flow, 0);
      const unit = plant.network.units.unitFor(dimensions.flow);
      const time = estimateLine(estimate(held / flow, undefined, plant.network.units.time));
      const flowKnown = exchangeInterval(plant, c.name, fit);
      lines.push(
        `${size()} is a quiet zone ('${c.name}') renewed by only ${estimateLine(estimate(flow, flowKnown, unit))}: its liquid changes once in ${time}`,
      );
    }
  }
  for (const s of plant.streams.filter((x) => x.role === "recycle")) {
    places.add(`${s.from}>${s.to}`);
    lines.push(`${percentOf(s.flow / feed)} of the feed flow runs back from '${s.from}' to '${s.to}'`);
  }
  return { lines, bypass, dead, places };
}

function exchangeInterval(plant: Plant, name: string, fit: Fit): readonly [number, number] | undefined {
  const all = plant.network.compartments.flatMap((c) =>
    c.exchanges.filter((e) => c.name === name || e.partner === name).map((e) => e.flow),
  );
  return all.length === 1 ? intervalOf(all[0], fit) : undefined;
}

/** The interval of a value that is one fitted parameter and nothing else. */
function intervalOf(value: Value, fit: Fit): readonly [number, number] | undefined {
  const { expression } = value;
  if (expression.type !== "name") return undefined;
  return fit.parameters.find((p) => p.name === expression.name)?.interval95;
}

const percentOf = (share: number): string => `${(100 * share).toPrecision(2).replace(/\.0$/, "")} %`;

function unitOf(name: string): Unit {
  const unit = parseUnit(name);
  return "factor" in unit ? unit : one;
}
