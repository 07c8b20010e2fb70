import type { Point } from "../svg/spine.js";
import { bodyWords, type Placed } from "./blocks.js";
import { type Caption, caption, extent } from "./caption.js";
import type { PlacedBlock } from "./placing.js";
import { bodySize, type Scale } from "./scale.js";
import type { FlowSheet } from "./sheet.js";

/** A bar where the streams of a side are taller together than the body. */
export interface Manifold {
  readonly x: number;
  readonly top: number;
  readonly bottom: number;
}

export interface Mark extends Point {
  readonly is: "injection" | "probe";
}

export interface Row {
  readonly bodies: readonly Placed[];
  readonly captions: readonly Caption[];
}

/** Bodies that no stream reaches: a row of their own at the bottom of the frame. */
export function deadRow(sheet: FlowSheet, scale: Scale, left: number, top: number): Row {
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

/** Bars at a body's sides that are lower than their streams. */
export function manifoldsOf({ at, ports, ...block }: PlacedBlock): readonly Manifold[] {
  if (block.role === "junction" || block.role === "feed" || block.role === "outlet") return [];
  const bar = (x: number, half: number): readonly Manifold[] =>
    half > block.half.height - 1 ? [{ x, top: at.y - half - 1, bottom: at.y + half + 1 }] : [];
  return [...bar(at.x - block.half.width, ports.halfLeft), ...bar(at.x + block.half.width, ports.halfRight)];
}

/** A drop where tracer enters, a ring where it is seen: on a terminal's streams, or at a body's sides. */
export function marksOf(bodies: readonly Placed[]): readonly Mark[] {
  return bodies.flatMap(({ body, box }) =>
    (body.marks ?? []).map((is) => {
      const y = box.y + box.height / 2;
      if (body.role === "feed") return { is, x: box.x + box.width + 9, y };
      if (body.role === "outlet") return { is, x: box.x - 9, y };
      return { is, x: is === "injection" ? box.x + 10 : box.x + box.width - 10, y };
    }),
  );
}
