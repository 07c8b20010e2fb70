import type { Box, Svg } from "../svg/svg.js";
import { union } from "./boxes.js";
import { type Caption, caption, drawCaption, extent } from "./caption.js";
import { layOut } from "./layout.js";
import { legendOf } from "./legend.js";
import { type PictureOptions, picture } from "./picture.js";
import { inRows } from "./rows.js";
import { amount, typeset } from "./scale.js";
import type { FlowSheet } from "./sheet.js";

const margin = 18;

/** The flow diagram of a sheet as one self-contained SVG: bodies sized by volume, streams by flow; in rows where it is long. */
export function drawNetwork(sheet: FlowSheet, options: PictureOptions = {}): Svg {
  const layout = layOut(sheet);
  const { bounds, parts: drawn, says } = inRows(layout);
  const legend = legendOf(sheet, bounds, layout.scale);
  const heading = options.untitled ? [] : headingOf(sheet, bounds, says);
  const all = union([bounds, ...legend.captions.map((c) => c.box), legend.box, ...heading.map((c) => c.box)]);
  const view = { x: all.x - margin, y: all.y - margin, width: all.width + 2 * margin, height: all.height + 2 * margin };
  const parts = [...drawn, ...[...heading, ...legend.captions].map(drawCaption), legend.marks];
  return picture(sheet.title, inWords(sheet), view, options.theme ?? "auto", parts);
}

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

function headingOf(sheet: FlowSheet, bounds: Box, more: string): readonly Caption[] {
  const words = [{ words: sheet.title, style: "title" as const }];
  const lines = [sheet.says ? typeset(sheet.says) : "", more].filter((line) => line !== "");
  const says = lines.map((line) => ({ words: line, style: "quiet" as const }));
  const { height } = extent([...words, ...says]);
  return [caption([...words, ...says], bounds.x, bounds.y - height - 12)];
}
