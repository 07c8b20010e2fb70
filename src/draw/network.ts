import { circle, element, group, line, path, rectangle } from "../svg/marks.js";
import { mosaicBody } from "../svg/mosaic-body.js";
import { type Point, samples, spinePath } from "../svg/spine.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import type { Arcs } from "./blocks.js";
import { union } from "./boxes.js";
import { type Caption, caption, drawCaption, extent } from "./caption.js";
import { type Layout, layOut } from "./layout.js";
import { type PictureOptions, picture } from "./picture.js";
import type { Ribbon } from "./placing.js";
import { amount, roundAmount, typeset } from "./scale.js";
import type { FlowSheet } from "./sheet.js";

const margin = 18;

/** The flow diagram of a sheet as one self-contained SVG: bodies sized by volume, streams by flow. */
export function drawNetwork(sheet: FlowSheet, options: PictureOptions = {}): Svg {
  const layout = layOut(sheet);
  const legend = legendOf(sheet, layout);
  const heading = options.untitled ? [] : headingOf(sheet, layout);
  const all = union([layout.bounds, ...legend.captions.map((c) => c.box), legend.box, ...heading.map((c) => c.box)]);
  const view = { x: all.x - margin, y: all.y - margin, width: all.width + 2 * margin, height: all.height + 2 * margin };
  const parts = [
    rectangle(layout.frame, "frame", 14),
    ...layout.parts.map((p) => rectangle(p.box, "frame part", 8)),
    group("streams", inDrawingOrder(layout.ribbons).map(drawRibbon)),
    group("bodies", layout.bodies.map(drawBody)),
    ...layout.manifolds.map((m) => line(m.x, m.top, m.x, m.bottom, "manifold")),
    ...layout.arcs.map(drawArcs),
    ...layout.marks.map(drawMark),
    ...layout.labels.flatMap(({ leader: l }) => (l ? [line(l.from.x, l.from.y, l.to.x, l.to.y, "leader")] : [])),
    ...[
      ...heading,
      ...layout.captions,
      ...layout.parts.map((p) => p.title),
      ...layout.labels.map((l) => l.caption),
      ...legend.captions,
    ].map(drawCaption),
    legend.marks,
  ];
  return picture(sheet.title, inWords(sheet), view, options.theme ?? "auto", parts);
}

/** The kind's picture; with a tone, the same once in the paper's colour, since streams end under it, and once in the tone. */
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

/** Even the weakest tone is told from paper. */
const toneStrength = (tone: number): number => 0.06 + 0.84 * tone;

/** What the drawing shows, for those who cannot see it. */
export function inWords(sheet: FlowSheet): string {
  const bodies = sheet.bodies
    .filter((b) => b.volume > 0)
    .map(
      (b) =>
        `${b.label ?? b.name} ${amount(b.volume, sheet.units.volume)}${b.note ? ` (${[b.note, b.tilesSay].filter(Boolean).join(", ")})` : ""}${b.role === "dead" ? " (out of reach)" : ""}`,
    );
  const streams = sheet.streams.map((s) => {
    const flow = amount(s.flow, sheet.units.flow);
    return s.role === "exchange"
      ? `${s.from} exchanges ${flow} with ${s.to}`
      : `${s.from} to ${s.to} ${flow} (${s.role})`;
  });
  const tones = sheet.tones ? `Tone of the bodies: ${sheet.tones.quantity}. ` : "";
  return `${tones}Bodies: ${bodies.join(", ") || "none"}. Streams: ${streams.join("; ") || "none"}.`;
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
  const heads = via === "gaps" ? [] : chevrons(spine, trip.width, `chevron${accent}`);
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

function headingOf(sheet: FlowSheet, { bounds }: Layout): readonly Caption[] {
  const words = [{ words: sheet.title, style: "title" as const }];
  const says = sheet.says ? [{ words: typeset(sheet.says), style: "quiet" as const }] : [];
  const { height } = extent([...words, ...says]);
  return [caption([...words, ...says], bounds.x, bounds.y - height - 12)];
}

const toneSteps = 10;
const toneStep = 12; // px

/** The tones from the weakest to the strongest. */
const toneBar = (x: number, y: number): readonly Svg[] =>
  Array.from({ length: toneSteps }, (_, k) =>
    element("rect", {
      class: "tone",
      "fill-opacity": toneStrength(k / (toneSteps - 1)),
      x: x + k * toneStep,
      y,
      width: toneStep,
      height: 16,
    }),
  );

/** The scales: a square of a round volume and a ribbon of a round flow. */
function legendOf(sheet: FlowSheet, { bounds, scale }: Layout): { marks: Svg; captions: readonly Caption[]; box: Box } {
  const top = bounds.y + bounds.height + 14;
  const captions: Caption[] = [];
  const marks: Svg[] = [];
  let x = bounds.x;
  if (sheet.bodies.some((b) => b.volume > 0)) {
    const volume = roundAmount(700 / scale.area, sheet.units.volume);
    const side = Math.sqrt(volume * scale.area);
    marks.push(rectangle({ x, y: top + 14 - side / 2, width: side, height: side }, "scale"));
    captions.push(
      caption([{ words: `area of ${amount(volume, sheet.units.volume)}`, style: "quiet" }], x + side + 7, top + 7),
    );
    x += side + 7 + captions[0].box.width + 26;
  }
  if (sheet.streams.some((s) => s.role !== "exchange" && s.flow > 0)) {
    const flow = roundAmount(14 / scale.width, sheet.units.flow);
    const width = flow * scale.width;
    marks.push(rectangle({ x, y: top + 14 - width / 2, width: 30, height: width }, "scale"));
    captions.push(caption([{ words: `width of ${amount(flow, sheet.units.flow)}`, style: "quiet" }], x + 37, top + 7));
  }
  if (sheet.tones) {
    if (captions.length > 0) x += 37 + captions[captions.length - 1].box.width + 26;
    const { quantity, low, high } = sheet.tones;
    if (low === high) {
      captions.push(caption([{ words: `${quantity} ${low} everywhere`, style: "quiet" }], x, top + 7));
      return { marks: marks.join(""), captions, box: { x: bounds.x, y: top, width: 1, height: 28 } };
    }
    const first = caption([{ words: `${quantity} ${low}`, style: "quiet" }], x, top + 7);
    const bar = first.box.x + first.box.width + 7;
    marks.push(...toneBar(bar, top + 6));
    captions.push(first, caption([{ words: high, style: "quiet" }], bar + toneSteps * toneStep + 7, top + 7));
  }
  return {
    marks: marks.join(""),
    captions,
    box: { x: bounds.x, y: top, width: 1, height: captions.length > 0 ? 28 : 0 },
  };
}
