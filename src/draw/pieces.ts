import { circle, element, group, line, path, rectangle } from "../svg/marks.js";
import { mosaicBody } from "../svg/mosaic-body.js";
import { type Point, samples, spinePath } from "../svg/spine.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import type { Arcs } from "./blocks.js";
import { overlaps } from "./boxes.js";
import { drawCaption } from "./caption.js";
import type { Layout } from "./layout.js";
import { toneStrength } from "./legend.js";
import { type Ribbon, ribbonBox } from "./placing.js";

/** All that a layout holds, as it is drawn from the lowest to the highest; `within` leaves out what lies beyond it. */
export function drawPieces(layout: Layout, within: Box = layout.bounds): readonly Svg[] {
  const here = (box: Box): boolean => overlaps(box, within);
  const near = (x: number): boolean => x >= within.x && x <= within.x + within.width;
  return [
    rectangle(layout.frame, "frame", 14),
    ...layout.parts.filter((p) => here(p.box)).map((p) => rectangle(p.box, "frame part", 8)),
    group("streams", inDrawingOrder(layout.ribbons.filter((r) => here(ribbonBox(r)))).map(drawRibbon)),
    group("bodies", layout.bodies.filter((b) => here(b.box)).map(drawBody)),
    ...layout.manifolds.filter((m) => near(m.x)).map((m) => line(m.x, m.top, m.x, m.bottom, "manifold")),
    ...layout.arcs.filter((a) => near(a.x)).map(drawArcs),
    ...layout.marks.filter((m) => near(m.x)).map(drawMark),
    ...layout.labels.flatMap(({ leader: l }) =>
      l && near(l.from.x) ? [line(l.from.x, l.from.y, l.to.x, l.to.y, "leader")] : [],
    ),
    ...[...layout.captions, ...layout.parts.map((p) => p.title), ...layout.labels.map((l) => l.caption)]
      .filter((c) => here(c.box))
      .map(drawCaption),
  ];
}

/** A heavy outline where the reader should look: the accent's hue is the others' tone in a grey print. */
function drawBody(placed: Layout["bodies"][number]): Svg {
  const { accent, volume } = placed.body;
  return accent && volume > 0 ? group("look-here", [pictureOf(placed)]) : pictureOf(placed);
}

function pictureOf({ body, box }: Layout["bodies"][number]): Svg {
  if (body.tiles) return mosaicBody(box, body.tiles, toneStrength);
  const own = body.picture?.(box) ?? rectangle(box, "terminal");
  if (body.tone === undefined) return own;
  return group("base", [own]) + element("g", { class: "toned", "fill-opacity": toneStrength(body.tone) }, own);
}

/** What runs back lies lowest, what bypasses on top. */
function inDrawingOrder(ribbons: readonly Ribbon[]): readonly Ribbon[] {
  const rank = (r: Ribbon): number => (r.back ? 0 : r.via === "gaps" ? 1 : 2);
  return [...ribbons].sort((a, b) => rank(a) - rank(b));
}

function drawRibbon(ribbon: Ribbon): Svg {
  const { trip, spine, back, via } = ribbon;
  const d = tuckedPath(ribbon);
  const accent = trip.stream.accent ? " accent" : "";
  const halo = path(d, "halo", { "stroke-width": trip.width + 3 });
  if (trip.role === "exchange") {
    const all = samples(spine, 3);
    const heads = [all[Math.max(0, all.length - 3)], { ...all[Math.min(2, all.length - 1)] }];
    return [
      halo,
      path(d, `arc${accent}`, { style: `stroke-width:${px(trip.width)}` }),
      path(d, "halo", { "stroke-width": trip.width - 2.5 }),
      chevron(heads[0], heads[0].dx, heads[0].dy, 5, `chevron${accent}`),
      chevron(heads[1], -heads[1].dx, -heads[1].dy, 5, `chevron${accent}`),
    ].join("");
  }
  const kind = trip.stream.gone ? "ribbon gone" : `ribbon${back ? " back" : ""}${accent}`;
  const heads = via === "gaps" ? [] : chevrons(spine, trip.width, "chevron");
  // what runs back is pale, with a rim: still a line where it is thin
  const rim = back && !trip.stream.gone ? path(d, `ribbon${accent}`, { "stroke-width": trip.width }) : "";
  const width = back ? Math.max(0, trip.width - 2) : trip.width;
  // dark edges: the accent's hue is the others' tone in a grey print
  const edge =
    trip.stream.accent && !trip.stream.gone ? path(d, "ribbon edge", { "stroke-width": trip.width + 2 }) : "";
  return [halo, edge, rim, width > 0 ? path(d, kind, { "stroke-width": width }) : "", ...heads].join("");
}

/** The ribbon's way, drawn on under the bodies at both ends. */
function tuckedPath({ spine, via, tuck }: Ribbon): string {
  const { start, pieces } = spine;
  const end = pieces[pieces.length - 1].to;
  const last = { x: end.x + (via === "side" ? -tuck.to : tuck.to), y: end.y };
  return spinePath({ start: { x: start.x - tuck.from, y: start.y }, pieces: [{ to: start }, ...pieces, { to: last }] });
}

/** Chevrons along the level piece of a lane. */
function chevrons(spine: Ribbon["spine"], width: number, className: string): readonly Svg[] {
  const level = samples(spine, 4).filter((p) => Math.abs(p.dy) < 0.02);
  const size = Math.min(7, Math.max(3, width * 0.3));
  const count = Math.max(1, Math.round(level.length / 22));
  return Array.from({ length: count }, (_, k) => {
    const p = level[Math.floor(((k + 0.5) / count) * level.length)];
    return p ? chevron(p, p.dx, p.dy, size, className) : "";
  });
}

function chevron(tip: Point, dx: number, dy: number, size: number, className: string): Svg {
  const back = { x: tip.x - dx * size * 0.8, y: tip.y - dy * size * 0.8 };
  const a = { x: back.x - dy * size, y: back.y + dx * size };
  const b = { x: back.x + dy * size, y: back.y - dx * size };
  return path(`M${px(a.x)} ${px(a.y)}L${px(tip.x)} ${px(tip.y)}L${px(b.x)} ${px(b.y)}`, className);
}

/** Two opposed arcs with heads: as much goes down as comes up. */
function drawArcs({ stream, x, top, bottom }: Arcs): Svg {
  const kind = stream.accent ? " accent" : "";
  const arc = (side: number, from: number, to: number): Svg => {
    const middle = (from + to) / 2;
    const way = Math.sign(to - from);
    const end = { x: x + side * 4, y: to - way };
    return (
      path(
        `M${px(x + side * 4)} ${px(from + way)}Q${px(x + side * 13)} ${px(middle)} ${px(end.x)} ${px(end.y)}`,
        `arc${kind}`,
      ) + chevron(end, -side * 0.4, way * 0.92, 3.5, `chevron${kind}`)
    );
  };
  return arc(-1, top, bottom) + arc(1, bottom, top);
}

function drawMark({ is, x, y }: Layout["marks"][number]): Svg {
  if (is === "probe") return circle(x, y, 5, "ring");
  const d = `M${px(x)} ${px(y - 9)}C${px(x + 2)} ${px(y - 4)} ${px(x + 5.5)} ${px(y - 2)} ${px(x + 5.5)} ${px(y + 2)}A5.5 5.5 0 0 1 ${px(x - 5.5)} ${px(y + 2)}C${px(x - 5.5)} ${px(y - 2)} ${px(x - 2)} ${px(y - 4)} ${px(x)} ${px(y - 9)}Z`;
  return path(d, "drop");
}
