import type { CurvesOptions } from "../draw/curves.js";
import type { Plotted } from "../draw/plotted.js";

/** A figure as the ending of its file asks for: SVG, or PNG in the light theme. */
export async function drawnAs(file: string, plot: (options: CurvesOptions) => Plotted): Promise<string | Uint8Array> {
  if (!/\.png$/i.test(file)) return `${plot({}).drawing}\n`;
  return (await import("./png.js")).pngOf(plot({ theme: "light" }).drawing);
}
