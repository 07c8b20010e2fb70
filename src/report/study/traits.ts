import { kindValues } from "../../compile/evaluate.js";
import type { Plant, PlantStream } from "../../compile/plant.js";
import type { Fit } from "../../fit/result.js";
import { type Compartment, type Feed, isClosed, type Stream } from "../../model/network.js";
import { holdUp } from "../../units/basis.js";
import { dimensions } from "../../units/dimension.js";
import { estimateLine } from "../digits.js";
import { estimate, percent } from "./estimate.js";
import { intervalOf } from "./interval-of.js";

/** Something that a fitted network says is wrong with its vessel. */
export interface Trait {
  readonly is: "bypass" | "dead" | "quiet" | "recycle";
  readonly line: string;
  /** The body or stream (`feed>product`) that carries it. */
  readonly place: string;
}

/** What can look like a trait without being one, and the check that tells (job of a tracer test, common practice). */
export const secondLook: Readonly<Record<Trait["is"], { readonly couldBe: string; readonly next: string }>> = {
  bypass: {
    couldBe: "poor mixing where the tracer went in, a clock that is off, a dose heavier than the liquid",
    next: "repeat with a diluted dose; sample the outlet at a second depth",
  },
  quiet: {
    couldBe: "a drifting baseline, tracer held back by walls or solids, tracer that comes round again",
    next: "a second tracer, a blank upstream throughout, a probe inside the zone",
  },
  dead: {
    couldBe: "a volume or flow that is off, or a zone renewed so slowly that the test ended before its tail",
    next: "check volume and flow meter; test longer",
  },
  recycle: {
    couldBe: "tracer that returns through the plant, or repeated dosing",
    next: "measure the inlet too",
  },
};

/** Shares smaller than this are not worth a line. */
const worthSaying = 0.002;

/** Bypasses, dead water, quiet zones and recycles of a fitted plant, with intervals where the fit gives them. */
export function traitsOf(plant: Plant, fit: Fit): Trait[] {
  // In a closed vessel all goes round: that is no finding, and there is no feed to measure it by.
  const recycles = isClosed(plant) ? [] : plant.streams.filter((s) => s.role === "recycle");
  const feed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  return [
    ...plant.network.feeds.flatMap((f) => bypasses(f, plant, fit)),
    ...plant.network.compartments.flatMap((c) => stillWater(c, plant, fit)),
    ...recycles.map(
      (s): Trait => ({
        is: "recycle",
        place: `${s.from}>${s.to}`,
        line: `${percentOf(s.flow / feed)} of the feed flow runs back from '${s.from}' to '${s.to}'`,
      }),
    ),
  ];
}

function bypasses(f: Feed, plant: Plant, fit: Fit): Trait[] {
  return waysPast(f.name, plant).flatMap(({ streams, share }): Trait[] => {
    if (!(share >= worthSaying)) return [];
    const to = streams[streams.length - 1].to;
    const splits = streams.flatMap((s) => splitOf(s, plant) ?? []);
    // of several splits on one way no interval follows without their correlation
    const known = splits.length === 1 && splits[0].is === "share" ? intervalOf(splits[0].value, plant, fit) : undefined;
    const amount = estimateLine(estimate(share, known, percent));
    const place = `${streams[0].from}>${streams[0].to}`;
    return [{ is: "bypass", place, line: `${amount} of '${f.name}' slips past the vessel to '${to}'` }];
  });
}

/** A way from a feed to an outlet that meets nothing but places without volume, and the share of the feed that takes it. */
interface WayPast {
  readonly streams: readonly PlantStream[];
  readonly share: number;
}

function waysPast(feed: string, plant: Plant): readonly WayPast[] {
  const outlets = new Set(plant.outlets.map((o) => o.name));
  const empty = new Set(
    plant.network.compartments
      .filter((c) => c.kind.volume(kindValues(c, plant.env)) === 0 && c.kind.flows)
      .map((c) => c.name),
  );
  const onward = (from: string): readonly PlantStream[] =>
    plant.streams.filter((s) => s.from === from && s.role === "forward");
  const follow = (from: string, so: WayPast): readonly WayPast[] => {
    const own = onward(from);
    const all = own.reduce((sum, s) => sum + s.flow, 0);
    return own.flatMap((s) => {
      const way = { streams: [...so.streams, s], share: so.share * (s.flow / all) };
      if (outlets.has(s.to)) return [way];
      return empty.has(s.to) && way.streams.length <= empty.size ? follow(s.to, way) : [];
    });
  };
  return follow(feed, { streams: [], share: 1 });
}

/** How the file divides what leaves the place that the stream comes from, where it divides it. */
function splitOf(s: PlantStream, { network }: Plant): Stream["split"] | undefined {
  const ways = [...network.feeds, ...network.compartments].find((x) => x.name === s.from)?.streams ?? [];
  return ways.length > 1 ? ways.find((w) => w.to === s.to)?.split : undefined;
}

/** Water that the flow never reaches, or only by exchange. */
function stillWater(c: Compartment, plant: Plant, fit: Fit): Trait[] {
  const held = c.values.volume?.of(plant.env) ?? 0;
  const share = held / plant.volume.total;
  if (!(share >= worthSaying)) return [];
  const { units } = plant.network;
  const known = c.values.volume && intervalOf(c.values.volume, plant, fit);
  const size = `${estimateLine(estimate(held, known, units.unitFor(dimensions.volume)))}, ${percentOf(share)} of the ${holdUp(plant.network.basis)},`;
  if (!c.kind.flows) {
    return [{ is: "dead", place: c.name, line: `${size} is never reached by the flow ('${c.name}')` }];
  }
  const touching = plant.streams.filter((s) => s.from === c.name || s.to === c.name);
  if (touching.length === 0 || touching.some((s) => s.role !== "exchange")) return [];
  const flow = touching.reduce((sum, s) => sum + s.flow, 0);
  const flows = plant.network.compartments.flatMap((b) =>
    b.exchanges.filter((e) => b.name === c.name || e.partner === c.name).map((e) => e.flow),
  );
  const renewed = flows.length === 1 ? intervalOf(flows[0], plant, fit) : undefined;
  const by = estimateLine(estimate(flow, renewed, units.unitFor(dimensions.flow)));
  const time = estimateLine(estimate(held / flow, undefined, units.time));
  const line = `${size} is a quiet zone ('${c.name}') renewed by only ${by}: its liquid changes once in ${time}`;
  return [{ is: "quiet", place: c.name, line }];
}

const percentOf = (share: number): string => `${(100 * share).toPrecision(2).replace(/\.0$/, "")} %`;
