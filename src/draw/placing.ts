import { type Point, type Spine, samples } from "../svg/spine.js";
import type { Box } from "../svg/svg.js";
import { type Block, bodyBlock, junctionBlock, terminalBlock } from "./blocks.js";
import { union } from "./boxes.js";
import { extent, moved } from "./caption.js";
import { type Columns, columnsOf } from "./columns.js";
import { heightsOf } from "./heights.js";
import { spinesOf } from "./lanes.js";
import { type Ordered, orderBlocks } from "./order.js";
import { framesAround } from "./part-frames.js";
import { type Ports, portsOf, type Routed, routeTrips } from "./ports.js";
import { amount, type Scale } from "./scale.js";
import type { FlowSheet } from "./sheet.js";
import { itinerary, type Trip } from "./trips.js";
import type { Lane } from "./untangle.js";

/** A stream in its place. */
export interface Ribbon extends Routed {
  readonly spine: Spine;
  /** How far it is drawn on under the bodies at its ends, px: round ends leave no notch. */
  readonly tuck: { readonly from: number; readonly to: number };
}

/** A block in its place; its bodies, captions and arcs are moved there. */
export interface PlacedBlock extends Block {
  readonly at: Point;
  readonly ports: Ports;
  readonly column: number;
}

export interface Placing {
  readonly blocks: readonly PlacedBlock[];
  readonly ribbons: readonly Ribbon[];
  readonly columns: Columns;
}

const frameMargin = 30; // px between a terminal and its neighbour column, for marks and the vessel's frame

/** Blocks and the streams between them, in columns from the feeds to the outlets. */
export function placeBlocks(sheet: FlowSheet, scale: Scale): Placing {
  const { trips, blocks: names, hanging, edges } = itinerary(sheet, scale);
  const role = new Map(sheet.bodies.map((b) => [b.name, b.role]));
  const outlets = new Set(names.filter((name) => role.get(name) === "outlet"));
  const ordered = orderBlocks(names, edges, outlets, lanesOf(trips));
  const routed = routeTrips(trips, ordered);
  const ports = new Map(names.map((n) => [n, portsOf(n, routed, ordered, role.get(n) === "junction")]));
  const blocks = new Map(names.map((n) => [n, blockOf(n, sheet, scale, ports.get(n)!, routed, hanging)]));
  const lanes = laneWidths(routed, ordered);
  const framed = (id: string): { readonly above: number; readonly below: number } | undefined => {
    const own = blocks.get(id)?.reach;
    const { above, below } = framesAround(sheet.groups ?? [], id);
    return own && { above: own.above + above, below: own.below + below };
  };
  const reach = (id: string): { readonly above: number; readonly below: number } =>
    framed(id) ?? { above: lanes.get(id)! / 2 + 14, below: lanes.get(id)! / 2 + 2 };
  const y = heightsOf(ordered, routed, ports, reach);
  const columns = columnsOf(ordered, blocks, routed, labelWidth, largestDrop(ordered, routed, ports, y), {
    first: names.some((n) => role.get(n) === "feed") ? frameMargin : 0,
    last: outlets.size > 0 ? frameMargin : 0,
  });
  const halfWidth = (id: string): number => {
    const block = blocks.get(id);
    return !block || block.role === "junction" ? 0 : block.half.width;
  };
  const spines = spinesOf(routed, { ordered, columns, ports, y, halfWidth, reach });
  return {
    columns,
    blocks: [...blocks.values()].map((block) => {
      const column = ordered.seats.get(block.name)!.column;
      const at = { x: columns.middle[column], y: y.get(block.name)! };
      return { ...shifted(block, at), at, column, ports: ports.get(block.name)! };
    }),
    ribbons: routed.map((r) => {
      const tuck = (name: string, side: "halfLeft" | "halfRight"): number =>
        tuckUnder(blocks.get(name)!, ports.get(name)![side]);
      const arrival = r.via === "side" ? "halfRight" : "halfLeft";
      return { ...r, spine: spines.get(r)!, tuck: { from: tuck(r.from, "halfRight"), to: tuck(r.to, arrival) } };
    }),
  };
}

const lanesOf = (trips: readonly Trip[]): readonly Lane[] =>
  trips.flatMap(({ role, stream: { from, to } }): Lane[] => {
    if (role === "bypass") return [{ from, to, side: "over" }];
    return role === "recycle" ? [{ from, to, side: "under" }] : [];
  });

/** What a ribbon covers. */
export function ribbonBox({ spine, trip }: Ribbon): Box {
  const half = trip.width / 2;
  return union(samples(spine).map((p) => ({ x: p.x - half, y: p.y - half, width: 2 * half, height: 2 * half })));
}

function tuckUnder(block: Block, half: number): number {
  if (block.role !== "body" || half > block.half.height - 1) return 0;
  return Math.min(block.half.height, block.half.width);
}

function blockOf(
  name: string,
  sheet: FlowSheet,
  scale: Scale,
  ports: Ports,
  routed: readonly Routed[],
  hanging: Parameters<typeof bodyBlock>[4],
): Block {
  const body = sheet.bodies.find((b) => b.name === name)!;
  if (body.role === "junction") {
    const own = routed.filter((r) => r.from === name || r.to === name).map((r) => r.trip.width);
    return junctionBlock(body, Math.max(0, ...own), ports.stack);
  }
  if (body.role !== "feed" && body.role !== "outlet") return bodyBlock(body, sheet, scale, ports.stack, hanging);
  const flow = sheet.streams
    .filter((s) => s.role !== "exchange" && !s.gone && (body.role === "feed" ? s.from : s.to) === name)
    .reduce((sum, s) => sum + s.flow, 0);
  return terminalBlock(body, amount(flow, sheet.units.flow), ports.stack);
}

function laneWidths(routed: readonly Routed[], ordered: Ordered): ReadonlyMap<string, number> {
  const widths = new Map([...ordered.seats.keys()].map((id) => [id, 0]));
  for (const r of routed) for (const id of r.way.slice(1, -1)) widths.set(id, r.trip.width);
  return widths;
}

const labelWidth = ({ trip }: Routed): number =>
  trip.stream.label === "" ? 0 : extent([{ words: trip.stream.label, style: "plain" }]).width;

/** The largest rise or fall of an onward stream in the gap left of each column. */
function largestDrop(
  ordered: Ordered,
  routed: readonly Routed[],
  ports: ReadonlyMap<string, Ports>,
  y: ReadonlyMap<string, number>,
): (gap: number) => number {
  const drops = new Map<number, number>();
  for (const { way, trip } of routed) {
    for (let k = 1; k < way.length; k++) {
      const from = y.get(way[k - 1])! + (ports.get(way[k - 1])?.right.get(trip) ?? 0);
      const to = y.get(way[k])! + (ports.get(way[k])?.left.get(trip) ?? 0);
      const gap = ordered.seats.get(way[k])!.column;
      drops.set(gap, Math.max(drops.get(gap) ?? 0, Math.abs(to - from)));
    }
  }
  return (gap) => drops.get(gap) ?? 0;
}

function shifted(b: Block, { x, y }: Point): Block {
  return {
    ...b,
    bodies: b.bodies.map((p) => ({ ...p, box: { ...p.box, x: p.box.x + x, y: p.box.y + y } })),
    captions: b.captions.map((c) => moved(c, x, y)),
    arcs: b.arcs.map((a) => ({ ...a, x: a.x + x, top: a.top + y, bottom: a.bottom + y })),
  };
}
