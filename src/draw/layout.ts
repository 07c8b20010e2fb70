import { samples } from "../svg/spine.js";
import type { Box } from "../svg/svg.js";
import { type Arcs, labelWords, type Placed } from "./blocks.js";
import { clipTo, union } from "./boxes.js";
import type { Caption } from "./caption.js";
import { Clutter } from "./clutter.js";
import { deadRow, type Manifold, type Mark, manifoldsOf, marksOf, type Row } from "./extras.js";
import { type LabelWish, occupyRibbon, type PlacedLabel, placeLabels } from "./labels.js";
import { type PartFrame, type Passing, partFrames } from "./part-frames.js";
import { type Placing, placeBlocks, type Ribbon, ribbonBox } from "./placing.js";
import { type Scale, scaleOf } from "./scale.js";
import type { FlowSheet } from "./sheet.js";

/** Where everything stands, px from an origin of its own; `bounds` holds it all. */
export interface Layout {
  readonly scale: Scale;
  readonly bodies: readonly Placed[];
  readonly ribbons: readonly Ribbon[];
  readonly arcs: readonly Arcs[];
  readonly captions: readonly Caption[];
  readonly labels: readonly PlacedLabel[];
  readonly manifolds: readonly Manifold[];
  readonly marks: readonly Mark[];
  /** Frames of parts, inner ones first. */
  readonly parts: readonly PartFrame[];
  /** Around what belongs to the vessel: all but feeds and outlets. */
  readonly frame: Box;
  readonly bounds: Box;
}

const padding = 14; // px between the vessel's frame and what it holds

/**
 * Lays out a flow diagram: feeds left, outlets right, streams back under the bodies, bypasses over them.
 * Never fails; what is not connected stands by itself. Costs about n^2 and, over some hundred bodies, seconds.
 */
export function layOut(sheet: FlowSheet): Layout {
  const scale = scaleOf(sheet);
  const placing = placeBlocks(sheet, scale);
  const { blocks, ribbons } = placing;
  const parts = partFrames(sheet.groups ?? [], blocks, ribbons.map(passing));
  const vessel = around(vesselOf(placing), parts);
  const dead = deadBelow(sheet, scale, placing, vessel);
  const bodies = [...blocks.flatMap((b) => b.bodies), ...dead.bodies];
  const captions = [...blocks.flatMap((b) => b.captions), ...dead.captions];
  const arcs = blocks.flatMap((b) => b.arcs);
  const marks = blocks.flatMap((b) => marksOf(b.bodies));
  const tall = union([vessel, ...boxesOf(dead)]);
  const room = { x: vessel.x + 5, y: tall.y - 8, width: vessel.width - 10, height: tall.height + 16 };
  const clutter = new Clutter();
  for (const box of boxesOf({ bodies, captions })) clutter.add(box);
  for (const a of arcs) clutter.add({ x: a.x - 10, y: a.top, width: 20, height: a.bottom - a.top });
  for (const { title } of parts) clutter.add(title.box);
  for (const edge of parts.flatMap((p) => edgesOf(p.box))) clutter.add(edge);
  for (const m of marks) clutter.add({ x: m.x - 7, y: m.y - 9, width: 14, height: 18 });
  for (const r of ribbons) occupyRibbon(clutter, r.spine, r.trip.width);
  const words = new Clutter();
  for (const { box } of [...captions, ...parts.map((p) => p.title)]) words.add(box);
  const labels = placeLabels(wishesOf(ribbons), clutter, words, room);
  const all = union([room, ...labels.map((l) => l.caption.box), ...boxesOf(dead)]);
  const right = Math.max(vessel.x + vessel.width, all.x + all.width + 8);
  const frame = { x: vessel.x, y: all.y - 6, width: right - vessel.x, height: all.height + 12 };
  const bounds = union([
    frame,
    ...parts.map((p) => p.box),
    ...boxesOf({ bodies, captions }),
    ...ribbons.map(ribbonBox),
  ]);
  return {
    scale,
    bodies,
    ribbons,
    arcs,
    captions,
    labels,
    manifolds: blocks.flatMap(manifoldsOf),
    marks,
    parts,
    frame,
    bounds,
  };
}

const edgesOf = ({ x, y, width, height }: Box): readonly Box[] => [
  { x, y: y - 1, width, height: 2 },
  { x, y: y + height - 1, width, height: 2 },
  { x: x - 2, y, width: 4, height },
  { x: x + width - 2, y, width: 4, height },
];

const passing = ({ trip: { stream, width }, spine }: Ribbon): Passing => ({
  from: stream.from,
  to: stream.to,
  covers: samples(spine, 4).map((p) => ({ x: p.x - width / 2, y: p.y - width / 2, width, height: width })),
});

/** The vessel's frame runs outside those of its parts. */
const around = (vessel: Box, parts: readonly PartFrame[]): Box =>
  parts.length === 0
    ? vessel
    : union([vessel, ...parts.map(({ box }) => ({ ...box, x: box.x - 6, width: box.width + 12 }))]);

/** The box of the vessel: between feeds and outlets where there are such, else around all. */
function vesselOf({ blocks, ribbons, columns }: Placing): Box {
  const inside = blocks.filter((b) => b.role !== "feed" && b.role !== "outlet");
  const feedsAlone = inside.every((b) => b.column > 0) && blocks.some((b) => b.role === "feed");
  const edge = feedsAlone ? columns.right[0] : undefined;
  const within = union([...inside.flatMap(boxesOf), ...ribbons.map((r) => clipTo(ribbonBox(r), edge))]);
  const left = edge === undefined ? within.x - padding : edge + 20;
  const last = columns.left.length - 1;
  const right = blocks.some((b) => b.role === "outlet") ? columns.left[last] - 20 : within.x + within.width + padding;
  return { x: left, y: within.y, width: right - left, height: within.height };
}

/** Dead water below all else in the vessel; a row that is wider than the vessel also clears the outlets' words. */
function deadBelow(sheet: FlowSheet, scale: Scale, { blocks }: Placing, vessel: Box): Row {
  const rowUnder = (box: Box): Row => deadRow(sheet, scale, vessel.x + padding, box.y + box.height + 22);
  const row = rowUnder(vessel);
  const fits = row.captions.every((c) => c.box.x + c.box.width < vessel.x + vessel.width);
  return fits ? row : rowUnder(union([vessel, ...blocks.flatMap(boxesOf)]));
}

const boxesOf = ({ bodies, captions }: Row): readonly Box[] => [
  ...bodies.map((p) => p.box),
  ...captions.map((c) => c.box),
];

function wishesOf(ribbons: readonly Ribbon[]): readonly LabelWish[] {
  return ribbons
    .filter((r) => r.trip.stream.label !== "")
    .map((r) => ({
      words: labelWords(r.trip.stream),
      spine: r.spine,
      width: r.trip.width,
      onLane: r.via === "over" || r.via === "under",
    }));
}
