import { type Box, escapeText, px, type Svg } from "./svg.js";

/** Attribute values: numbers go through `px`, text is escaped. `undefined` leaves the attribute out. */
export type Attributes = Readonly<Record<string, string | number | undefined>>;

/** One element. Children are SVG source already; use `text` for words. */
export function element(name: string, attributes: Attributes = {}, children?: Svg): Svg {
  let head = name;
  for (const [key, value] of Object.entries(attributes)) {
    if (value === undefined) continue;
    head += ` ${key}="${typeof value === "number" ? px(value) : escapeText(value)}"`;
  }
  return children === undefined ? `<${head}/>` : `<${head}>${children}</${name}>`;
}

/** Elements that belong together, under a class of the theme. */
export const group = (className: string, children: readonly Svg[]): Svg =>
  element("g", { class: className }, children.join(""));

/** A rectangle with round corners of the given radius, px. */
export const rectangle = (box: Box, className: string, radius = 0): Svg =>
  element("rect", {
    class: className,
    x: box.x,
    y: box.y,
    width: box.width,
    height: box.height,
    rx: radius > 0 ? radius : undefined,
  });

/** A straight line in px. */
export const line = (x1: number, y1: number, x2: number, y2: number, className: string): Svg =>
  element("line", { class: className, x1, y1, x2, y2 });

/** A disc or ring, by the class's fill and stroke. */
export const circle = (cx: number, cy: number, r: number, className: string): Svg =>
  element("circle", { class: className, cx, cy, r });

/** A path whose `d` was put together with `px`. */
export const path = (d: string, className: string, more: Attributes = {}): Svg =>
  element("path", { class: className, d, ...more });

/** Words whose baseline begins, ends or centres at (x, y). */
export const text = (x: number, y: number, words: string, className: string, anchor?: "middle" | "end"): Svg =>
  element("text", { class: className, x, y, "text-anchor": anchor }, escapeText(words));
