import { element, rectangle } from "../svg/marks.js";
import { type Box, escapeText, px, type Svg } from "../svg/svg.js";
import { classesIn, drawingDefinitions, drawingStyle, type Theme } from "../svg/theme.js";

/** Inner width of a drawing that stands beside another on a page, px; two of them with their margins fill an A4 sheet. */
export const columnWidth = 348;

/** From here down a drawing is narrow: what else stands side by side is put under one another. */
export const narrow = 480;

export interface PictureOptions {
  /** `auto` (default) follows the reader's screen and prints light. */
  readonly theme?: Theme;
  /** Leave out the title and the line under it, where a page already says them. */
  readonly untitled?: boolean;
}

/** A whole SVG that stands by itself: its own style, its title and what it shows in words. */
export function picture(title: string, says: string, view: Box, theme: Theme, parts: readonly Svg[]): Svg {
  const content = `${rectangle(view, "paper")}${parts.join("")}`;
  const used = classesIn(content);
  return element(
    "svg",
    {
      xmlns: "http://www.w3.org/2000/svg",
      class: "bm",
      viewBox: [view.x, view.y, view.width, view.height].map(px).join(" "),
      width: view.width,
      height: view.height,
      style: "max-width:100%;height:auto",
      role: "img",
    },
    `<title>${escapeText(title)}</title><desc>${escapeText(says)}</desc>` +
      `<style>${drawingStyle(theme, used)}</style>${drawingDefinitions(used)}${content}`,
  );
}
