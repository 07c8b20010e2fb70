import { aggregated, outermost } from "../draw/aggregate.js";
import { compared } from "../draw/compared.js";
import { drawNetwork } from "../draw/network.js";
import { parseNetwork } from "../parse/network.js";
import { escapeText, type Svg } from "../svg/svg.js";
import type { Context } from "./context.js";
import { type ShowOptions, sheetWith } from "./draw-show.js";
import { type Outcome, UsageError } from "./outcome.js";

export interface DrawOptions extends ShowOptions {
  readonly output?: string;
  readonly compare?: string;
}

/** `draw NETWORK`: the flow diagram as SVG or PNG, or in a page of its own. */
export async function draw(file: string, options: DrawOptions, { inputs, io }: Context): Promise<Outcome> {
  const { output, compare } = options;
  const ending = output === undefined ? "svg" : (/\.(\w+)$/.exec(output)?.[1].toLowerCase() ?? "");
  if (!["svg", "png", "html"].includes(ending)) throw new UsageError(`-o '${output}': draw to .svg, .png or .html`);
  const network = inputs.document(file, parseNetwork);
  const { sheet: own, converged } = sheetWith(network, options, inputs);
  const other = compare === undefined ? undefined : inputs.document(compare, parseNetwork);
  const sheet = other ? compared(own, sheetWith(other, options, inputs).sheet) : own;
  const few = aggregated(sheet, [network, ...(other ? [other] : [])].flatMap(outermost));
  const svg = drawNetwork(few, ending === "png" ? { theme: "light" } : {});
  const end = converged
    ? ({ status: 0 } as const)
    : ({ status: 3, notes: ["backmix: the steady state did not converge; the best found is drawn"] } as const);
  if (output === undefined) return { ...end, text: `${svg}\n`, json: { ok: converged, svg } };
  io.write(output, await contentOf(ending, network.title, svg));
  return { ...end, text: `${output}: ${sheet.title}`, json: { ok: converged, written: output } };
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
