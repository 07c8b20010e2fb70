/** A piece of SVG source. */
export type Svg = string;

/** A rectangle in px, y down. */
export interface Box {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

/** The one place that prints numbers into pictures: rounded to 0.01 px, so that a drawing is the same on every machine. */
export const px = (x: number): string => String(Math.round(x * 100) / 100 || 0);

/** Text made safe for SVG and HTML. */
export const escapeText = (text: string): string =>
  text.replace(/&/g, "&amp;").replace(/</g, "&lt;").replace(/>/g, "&gt;").replace(/"/g, "&quot;");
