import { text } from "../svg/marks.js";
import { textWidth } from "../svg/measure.js";
import type { Box, Svg } from "../svg/svg.js";

/** A line of words in one of the theme's text classes. */
export interface Words {
  readonly words: string;
  readonly style: "name" | "plain" | "quiet" | "look" | "title";
  readonly underlined?: boolean | undefined;
}

/** Words with a place. `box` is what they cover. */
export interface Caption {
  readonly lines: readonly Words[];
  readonly box: Box;
  readonly anchor: "start" | "middle" | "end";
}

export const lineHeight = 14;

/** Width of the widest line and height of all, px. */
export function extent(lines: readonly Words[]): { readonly width: number; readonly height: number } {
  const width = Math.max(0, ...lines.map((l) => textWidth(l.words, size(l), weight(l))));
  return { width, height: lines.reduce((sum, l) => sum + (l.style === "title" ? 20 : lineHeight), 0) };
}

/** A caption whose box has its left, middle or right (by `anchor`) at `x` and its top at `y`. */
export function caption(lines: readonly Words[], x: number, y: number, anchor: Caption["anchor"] = "start"): Caption {
  const { width, height } = extent(lines);
  const left = anchor === "start" ? x : anchor === "middle" ? x - width / 2 : x - width;
  return { lines, anchor, box: { x: left, y, width, height } };
}

export function moved({ lines, box, anchor }: Caption, dx: number, dy: number): Caption {
  return { lines, anchor, box: { ...box, x: box.x + dx, y: box.y + dy } };
}

export function drawCaption({ lines, box, anchor }: Caption): Svg {
  const x = anchor === "start" ? box.x : anchor === "middle" ? box.x + box.width / 2 : box.x + box.width;
  let y = box.y;
  return lines
    .map((l) => {
      const height = l.style === "title" ? 20 : lineHeight;
      y += height;
      const style = l.underlined ? `${l.style} fitted` : l.style;
      return text(x, y - height * 0.25, l.words, style, anchor === "start" ? undefined : anchor);
    })
    .join("");
}

/** A title in as many lines as keep it within a width, px; a single word is not cut. */
export function titleLines(title: string, width: number): Words[] {
  const lines: Words[] = [];
  for (const word of title.split(" ")) {
    const last = lines.pop();
    const joined: Words = { words: last ? `${last.words} ${word}` : word, style: "title" };
    if (last && extent([joined]).width > width) lines.push(last, { words: word, style: "title" });
    else lines.push(joined);
  }
  return lines;
}

const size = ({ style }: Words): number => (style === "title" ? 15 : style === "name" ? 12 : 11);

const weight = ({ style }: Words): "regular" | "bold" => (style === "name" || style === "title" ? "bold" : "regular");
