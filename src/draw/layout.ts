import { type Point, type Spine, samples } from "../svg/spine.js";
import type { Box } from "../svg/svg.js";
import { type Arcs, type Block, bodyBlock, bodyWords, junctionBlock, type Placed, terminalBlock } from "./blocks.js";
import { type Caption, caption, extent, moved } from "./caption.js";
import { Clutter } from "./clutter.js";
import { columnsOf } from "./columns.js";
import { heightsOf } from "./heights.js";
import { type LabelWish, occupyRibbon, type PlacedLabel, placeLabels } from "./labels.js";
import { spinesOf } from "./lanes.js";
import { type Ordered, orderBlocks } from "./order.js";
import { type Ports, portsOf, type Routed, routeTrips } from "./ports.js";
import { amount, bodySize, type Scale, scaleOf } from "./scale.js";
import type { FlowSheet } from "./sheet.js";
import { itinerary } from "./trips.js";

/** A stream in its place. */
export interface Ribbon extends Routed {
  readonly spine: Spine;
}

/** Where everything stands, px from an origin of its own; `bounds` holds it all. */
export interface Layout {
  readonly scale: Scale;
  readonly bodies: readonly Placed[];
  readonly ribbons: readonly Ribbon[];
  readonly arcs: readonly Arcs[];
  readonly captions: readonly Caption[];
  readonly labels: readonly PlacedLabel[];
  /** Bars where the streams of a side are taller together than the body. */
  readonly manifolds: readonly { readonly x: number; readonly top: number; readonly bottom: number }[];
  readonly marks: readonly (Point & { readonly is: "injection" | "probe" })[];
  /** Around what belongs to the vessel: all but feeds and outlets. */
  readonly frame: Box;
  readonly bounds: Box;
}

const frameMargin = 30; // px between a terminal and its neighbour column, for marks and the vessel's frame
const padding = 14;

/**
 * Lays out a flow diagram: feeds left, outlets right, streams back under the bodies, bypasses over them.
 * Never fails; what is not connected stands by itself. Costs about n^2 and, over some hundred bodies, seconds.
 */
export function layOut(sheet: FlowSheet): Layout {
  const scale = scaleOf(sheet);
  const { trips, blocks: names, hanging, edges } = itinerary(sheet, scale);
  const role = new Map(sheet.bodies.map((b) => [b.name, b.role]));
  const outlets = new Set(names.filter((name) => role.get(name) === "outlet"));
  const ordered = orderBlocks(names, edges, outlets);
  const routed = routeTrips(trips, ordered);
  const ports = new Map(names.map((n) => [n, portsOf(n, routed, ordered, role.get(n) === "junction")]));
  const blocks = new Map(names.map((n) => [n, blockOf(n, sheet, scale, ports.get(n)!, routed, hanging)]));
  const lanes = laneWidths(routed, ordered);
  const reach = (id: string): Block["reach"] | { above: number; below: number } =>
    blocks.get(id)?.reach ?? { above: lanes.get(id)! / 2 + 14, below: lanes.get(id)! / 2 + 2 };
  const y = heightsOf(ordered, routed, ports, reach);
  const columns = columnsOf(ordered, blocks, routed, (r) => labelWidth(r), largestDrop(ordered, routed, ports, y), {
    first: names.some((n) => role.get(n) === "feed") ? frameMargin : 0,
    last: outlets.size > 0 ? frameMargin : 0,
  });
  const halfWidth = (id: string): number => {
    const block = blocks.get(id);
    return !block || block.role === "junction" ? 0 : block.half.width;
  };
  const spines = spinesOf(routed, { ordered, columns, ports, y, halfWidth, reach });
  const ribbons = routed.map((r): Ribbon => ({ ...r, spine: spines.get(r)! }));
  const shifted = [...blocks.values()].map((b) => {
    const at = { x: columns.middle[ordered.seats.get(b.name)!.column], y: y.get(b.name)! };
    return { ...shift(b, at.x, at.y), block: b, at };
  });
  const inside = shifted.filter((s) => s.block.role !== "feed" && s.block.role !== "outlet");
  const feedsAlone =
    names.some((n) => role.get(n) === "feed") && inside.every((s) => ordered.seats.get(s.block.name)!.column > 0);
  const within = union([
    ...inside.flatMap((s) => [...s.bodies.map((p) => p.box), ...s.captions.map((c) => c.box)]),
    ...ribbons.map((r) => clipTo(ribbonBox(r), feedsAlone ? columns.right[0] : undefined)),
  ]);
  const last = columns.middle.length - 1;
  const sides = {
    left: feedsAlone ? columns.right[0] + 20 : within.x - padding,
    right: outlets.size > 0 ? columns.left[last] - 20 : within.x + within.width + padding,
  };
  const everything = union(shifted.flatMap((s) => [...s.bodies.map((p) => p.box), ...s.captions.map((c) => c.box)]));
  const lowest = (box: Box): number => box.y + box.height + 22;
  const rowAt = (top: number): ReturnType<typeof deadRow> => deadRow(sheet, scale, sides.left + padding, top);
  const tight = rowAt(lowest(within));
  // a row that is wider than the vessel must also clear the outlets' words
  const fits = tight.captions.every((c) => c.box.x + c.box.width < sides.right);
  const dead = fits ? tight : rowAt(Math.max(lowest(within), lowest(everything)));
  const bodies = [...shifted.flatMap((s) => s.bodies), ...dead.bodies];
  const captions = [...shifted.flatMap((s) => s.captions), ...dead.captions];
  const arcs = shifted.flatMap((s) => s.arcs);
  const manifolds = shifted.flatMap((s) => manifoldsOf(s.block, s.at, ports.get(s.block.name)!));
  const marks = shifted.flatMap((s) => marksOf(s.bodies));
  const tall = union([within, ...dead.captions.map((c) => c.box), ...dead.bodies.map((p) => p.box)]);
  const room = { x: sides.left, y: tall.y - 8, width: sides.right - sides.left, height: tall.height + 16 };
  const clutter = new Clutter();
  for (const p of bodies) clutter.add(p.box);
  for (const c of captions) clutter.add(c.box);
  for (const a of arcs) clutter.add({ x: a.x - 10, y: a.top, width: 20, height: a.bottom - a.top });
  for (const m of marks) clutter.add({ x: m.x - 7, y: m.y - 9, width: 14, height: 18 });
  for (const r of ribbons) occupyRibbon(clutter, r.spine, r.trip.width);
  const labels = placeLabels(wishesOf(ribbons), clutter, room);
  const all = union([
    room,
    ...labels.map((l) => l.caption.box),
    ...dead.bodies.map((p) => p.box),
    ...dead.captions.map((c) => c.box),
  ]);
  const frame = {
    x: sides.left,
    y: all.y - 6,
    width: Math.max(sides.right, all.x + all.width + 8) - sides.left,
    height: all.height + 12,
  };
  const bounds = union([frame, ...bodies.map((p) => p.box), ...captions.map((c) => c.box), ...ribbons.map(ribbonBox)]);
  return { scale, bodies, ribbons, arcs, captions, labels, manifolds, marks, frame, bounds };
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
    .filter((s) => s.role !== "exchange" && (body.role === "feed" ? s.from : s.to) === name)
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

/** Bodies that no stream reaches: a row of their own at the bottom of the frame. */
function deadRow(sheet: FlowSheet, scale: Scale, left: number, top: number): { bodies: Placed[]; captions: Caption[] } {
  const row = { bodies: [] as Placed[], captions: [] as Caption[] };
  let x = left;
  for (const body of sheet.bodies.filter((b) => b.role === "dead")) {
    const size = bodySize(body, scale);
    const words = bodyWords({ ...body, note: body.note ?? "out of reach" }, sheet, scale);
    const { height } = extent(words);
    const y = top + Math.max(0, (height - size.height) / 2);
    row.bodies.push({ body, box: { x, y, ...size } });
    const own = caption(words, x + size.width + 8, y + size.height / 2 - height / 2);
    row.captions.push(own);
    x = own.box.x + own.box.width + 24;
  }
  return row;
}

function wishesOf(ribbons: readonly Ribbon[]): readonly LabelWish[] {
  return ribbons
    .filter((r) => r.trip.stream.label !== "")
    .map((r) => ({
      words: { words: r.trip.stream.label, style: r.trip.stream.accent ? "look" : "plain" },
      spine: r.spine,
      width: r.trip.width,
      onLane: r.via === "over" || r.via === "under",
    }));
}

function manifoldsOf(block: Block, at: Point, ports: Ports): Layout["manifolds"] {
  if (block.role === "junction" || block.role === "feed" || block.role === "outlet") return [];
  const bar = (x: number, half: number): Layout["manifolds"] =>
    half > block.half.height - 1 ? [{ x, top: at.y - half - 1, bottom: at.y + half + 1 }] : [];
  return [...bar(at.x - block.half.width, ports.halfLeft), ...bar(at.x + block.half.width, ports.halfRight)];
}

/** A drop where tracer enters, a ring where it is seen: on a terminal's streams, or at a body's sides. */
function marksOf(bodies: readonly Placed[]): Layout["marks"] {
  return bodies.flatMap(({ body, box }) =>
    (body.marks ?? []).map((is) => {
      const y = box.y + box.height / 2;
      if (body.role === "feed") return { is, x: box.x + box.width + 9, y };
      if (body.role === "outlet") return { is, x: box.x - 9, y };
      return { is, x: is === "injection" ? box.x + 10 : box.x + box.width - 10, y };
    }),
  );
}

function shift(b: Block, dx: number, dy: number): { bodies: Placed[]; captions: Caption[]; arcs: Arcs[] } {
  return {
    bodies: b.bodies.map((p) => ({ ...p, box: { ...p.box, x: p.box.x + dx, y: p.box.y + dy } })),
    captions: b.captions.map((c) => moved(c, dx, dy)),
    arcs: b.arcs.map((a) => ({ ...a, x: a.x + dx, top: a.top + dy, bottom: a.bottom + dy })),
  };
}

function ribbonBox({ spine, trip }: Ribbon): Box {
  const half = trip.width / 2;
  return union(samples(spine).map((p) => ({ x: p.x - half, y: p.y - half, width: 2 * half, height: 2 * half })));
}

const clipTo = (box: Box, left: number | undefined): Box =>
  left === undefined || box.x >= left ? box : { ...box, x: left, width: Math.max(0, box.x + box.width - left) };

export function union(boxes: readonly Box[]): Box {
  if (boxes.length === 0) return { x: 0, y: 0, width: 0, height: 0 };
  const x = Math.min(...boxes.map((b) => b.x));
  const y = Math.min(...boxes.map((b) => b.y));
  const right = Math.max(...boxes.map((b) => b.x + b.width));
  const bottom = Math.max(...boxes.map((b) => b.y + b.height));
  return { x, y, width: right - x, height: bottom - y };
}
