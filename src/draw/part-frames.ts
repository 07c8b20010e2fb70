import type { Box } from "../svg/svg.js";
import type { Placed } from "./blocks.js";
import { overlaps, union } from "./boxes.js";
import { type Caption, caption, extent } from "./caption.js";
import type { SheetGroup } from "./sheet.js";

/** A light frame around the bodies of a part, its name at the top. */
export interface PartFrame {
  readonly box: Box;
  readonly title: Caption;
}

/** What moves as one: bodies with their captions. */
export interface Cluster {
  readonly bodies: readonly Placed[];
  readonly captions: readonly Caption[];
}

/** A stream in its place: where it begins and ends, and what it covers, piece by piece. */
export interface Passing {
  readonly from: string;
  readonly to: string;
  readonly covers: readonly Box[];
}

const room = 8; // px between a frame and what it holds
const titleRoom = 18; // px for its name

/** What the frames around a body take above and below it, px. */
export function framesAround(groups: readonly SheetGroup[], body: string): { above: number; below: number } {
  const depth = groups.filter((g) => g.members.includes(body)).length;
  return { above: depth * titleRoom, below: depth * room };
}

/**
 * Frames of parts, inner ones first. A part whose bodies do not stand by themselves, so that its frame would hold or cross
 * what is not its own, goes without.
 */
export function partFrames(
  groups: readonly SheetGroup[],
  clusters: readonly Cluster[],
  streams: readonly Passing[],
): PartFrame[] {
  const frames: { name: string; frame: PartFrame }[] = [];
  for (const { name, members } of [...groups].reverse()) {
    const own = new Set(members);
    const inside = clusters.filter((c) => c.bodies.some((p) => own.has(p.body.name)));
    if (inside.length === 0 || inside.some((c) => c.bodies.some((p) => !own.has(p.body.name)))) continue;
    const inner = frames.filter((f) => f.name.startsWith(`${name}.`)).map((f) => f.frame.box);
    const loops = streams.filter((s) => own.has(s.from) && own.has(s.to)).flatMap((s) => s.covers);
    const content = union([...inside.flatMap(boxesOf), ...inner, ...loops]);
    const words = [{ words: name, style: "quiet" as const }];
    const { width, height } = extent(words);
    const box = (above: number, below: number): Box => ({
      x: content.x - room,
      y: content.y - above,
      width: Math.max(content.width, width) + 2 * room,
      height: content.height + above + below,
    });
    const [under, over] = [box(titleRoom, room), box(room, titleRoom)];
    const ends = (frame: Box, y: number): Caption[] => [
      caption(words, frame.x + room, y),
      caption(words, frame.x + frame.width - room, y, "end"),
    ];
    const free = (title: Caption): boolean => !streams.some((s) => s.covers.some((c) => overlaps(c, title.box)));
    const titles = [
      ...ends(under, under.y + 2).map((title) => ({ box: under, title })),
      ...ends(over, over.y + over.height - height - 2).map((title) => ({ box: over, title })),
    ];
    const frame = titles.find(({ title }) => free(title)) ?? titles[0];
    const others = clusters.filter((c) => !inside.includes(c)).flatMap(boxesOf);
    const apart = frames.filter((f) => !f.name.startsWith(`${name}.`)).map((f) => f.frame.box);
    if (![...others, ...apart].some((other) => overlaps(other, frame.box))) frames.push({ name, frame });
  }
  return frames.map((f) => f.frame);
}

const boxesOf = ({ bodies, captions }: Cluster): Box[] => [...bodies.map((p) => p.box), ...captions.map((c) => c.box)];
