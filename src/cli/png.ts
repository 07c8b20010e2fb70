import { existsSync, readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { withRaisedDigits } from "../svg/raised.js";
import type { Svg } from "../svg/svg.js";

/** Pixels per px of the drawing: sharp on paper and on dense screens. */
const zoom = 2;
const face = "Liberation Sans";

let ready: Promise<Renderer> | undefined;

type Renderer = (svg: Svg) => Uint8Array;

/**
 * A drawing as PNG, the same on every machine: the renderer is packaged and sets text in the face that lies in
 * `shared/fonts`. The drawing must have a fixed theme; variables of style sheets mean nothing to the renderer.
 */
export async function pngOf(svg: Svg): Promise<Uint8Array> {
  ready ??= load();
  return (await ready)(svg);
}

async function load(): Promise<Renderer> {
  const { initWasm, Resvg } = await import("@resvg/resvg-wasm");
  await initWasm(readFileSync(createRequire(import.meta.url).resolve("@resvg/resvg-wasm/index_bg.wasm")));
  const fontBuffers = ["Regular", "Bold"].map((style) => readFileSync(fontFile(`LiberationSans-${style}.ttf`)));
  const font = { fontBuffers, defaultFontFamily: face, sansSerifFamily: face };
  return (svg) => new Resvg(withRaisedDigits(svg), { font, fitTo: { mode: "zoom", value: zoom } }).render().asPng();
}

/** Beside the sources or beside the bundle, whose files lie one or two folders under the package. */
function fontFile(name: string): URL {
  const places = ["../shared/fonts/", "../../shared/fonts/"].map((way) => new URL(way + name, import.meta.url));
  return places.find((p) => existsSync(p)) ?? places[0];
}
