import { flowSheet } from "../draw/flow-sheet.js";
import { drawNetwork } from "../draw/network.js";
import { parseNetwork } from "../parse/network.js";
import { escapeText } from "../svg/svg.js";
import type { Context } from "./context.js";
import { type Outcome, UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";
import { settingsFrom } from "./settings.js";

export interface DrawOptions {
  readonly output?: string;
  readonly set?: readonly string[];
}

/** `draw NETWORK`: the flow diagram as SVG, or in a page of its own. */
export function draw(file: string, { output, set }: DrawOptions, { inputs, io }: Context): Outcome {
  const ending = output === undefined ? "svg" : (/\.(\w+)$/.exec(output)?.[1].toLowerCase() ?? "");
  if (ending === "png") throw new UsageError("'.png' is not in this version of backmix; draw to .svg or .html");
  if (ending !== "svg" && ending !== "html") throw new UsageError(`-o '${output}': draw to .svg or .html`);
  const network = inputs.document(file, parseNetwork);
  const svg = drawNetwork(flowSheet(plantAt(network, settingsFrom(network, set))));
  const content = ending === "html" ? page(network.title, svg) : `${svg}\n`;
  if (output === undefined) return { status: 0, text: content, json: { ok: true, svg } };
  io.write(output, content);
  return { status: 0, text: `${output}: ${network.title}`, json: { ok: true, written: output } };
}

const page = (title: string, svg: string): string => `<!doctype html>
<html lang="en">
<head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>${escapeText(title)}</title>
<style>:root{color-scheme:light dark}body{margin:0}svg{max-width:100%;height:auto;display:block;margin:auto}</style></head>
<body>${svg}</body>
</html>
`;
