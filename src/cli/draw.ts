import { flowSheet } from "../draw/flow-sheet.js";
import { drawNetwork } from "../draw/network.js";
import { parseNetwork } from "../parse/network.js";
import { escapeText, type Svg } from "../svg/svg.js";
import type { Context } from "./context.js";
import { type Outcome, UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";
import { settingsFrom } from "./settings.js";

export interface DrawOptions {
  readonly output?: string;
  readonly set?: readonly string[];
}

/** `draw NETWORK`: the flow diagram as SVG or PNG, or in a page of its own. */
export async function draw(file: string, { output, set }: DrawOptions, { inputs, io }: Context): Promise<Outcome> {
  const ending = output === undefined ? "svg" : (/\.(\w+)$/.exec(output)?.[1].toLowerCase() ?? "");
  if (!["svg", "png", "html"].includes(ending)) throw new UsageError(`-o '${output}': draw to .svg, .png or .html`);
  const network = inputs.document(file, parseNetwork);
  const sheet = flowSheet(plantAt(network, settingsFrom(network, set)));
  const svg = drawNetwork(sheet, ending === "png" ? { theme: "light" } : {});
  if (output === undefined) return { status: 0, text: `${svg}\n`, json: { ok: true, svg } };
  io.write(output, await contentOf(ending, network.title, svg));
  return { status: 0, text: `${output}: ${network.title}`, json: { ok: true, written: output } };
}

async function contentOf(ending: string, title: string, svg: Svg): Promise<string | Uint8Array> {
  if (ending === "png") return (await import("./png.js")).pngOf(svg);
  return ending === "html" ? page(title, svg) : `${svg}\n`;
}

const page = (title: string, svg: string): string => `<!doctype html>
<html lang="en">
<head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>${escapeText(title)}</title>
<style>:root{color-scheme:light dark}body{margin:0}svg{max-width:100%;height:auto;display:block;margin:auto}</style></head>
<body>${svg}</body>
</html>
`;
