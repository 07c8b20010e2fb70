import { element, rectangle } from "../svg/marks.js";
import type { Box, Svg } from "../svg/svg.js";
import { type Caption, caption } from "./caption.js";
import { amount, roundAmount, type Scale } from "./scale.js";
import type { FlowSheet } from "./sheet.js";

/** Opacity of a tone of 0 to 1: even the weakest is told from paper. */
export const toneStrength = (tone: number): number => 0.06 + 0.84 * tone;

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

/** The scales below a drawing: a square of a round volume and a ribbon of a round flow. */
export function legendOf(
  sheet: FlowSheet,
  bounds: Box,
  scale: Scale,
): { marks: Svg; captions: readonly Caption[]; box: Box } {
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
