import { columnWidth } from "../draw/picture.js";
import { escapeText, type Svg } from "../svg/svg.js";
import { drawingDefinitions, drawingStyle } from "../svg/theme.js";
import type { Figure } from "./input.js";
import { embedded, embeddedJson } from "./page/embedded.js";

/** A piece of HTML source. */
export type Html = string;

/** A table's column: its heading, and whether it holds numbers (set right, in tabular figures). */
export interface Column {
  readonly head: string;
  readonly number?: boolean;
}

/** A cell: words, or words with a second, quieter line; numbers are not parted from their units. */
export type Cell = string | { readonly words: string; readonly under: string } | { readonly code: string };

/** Tables of no more rows than this are not broken between two sheets. */
const short = 8;

/** A table with its caption; the first cell of a row is its heading. Nothing where there are no rows. */
export function table(caption: string, columns: readonly Column[], rows: readonly (readonly Cell[])[]): Html {
  if (rows.length === 0) return "";
  const kind = (k: number): string => (columns[k]?.number ? ' class="number"' : "");
  const head = columns.map((c, k) => `<th scope="col"${kind(k)}>${escapeText(c.head)}</th>`).join("");
  const body = rows
    .map((row) => {
      const cells = row.map((cell, k) =>
        k === 0 ? `<th scope="row">${cellWords(cell)}</th>` : `<td${kind(k)}>${cellWords(cell)}</td>`,
      );
      return `<tr>${cells.join("")}</tr>`;
    })
    .join("");
  return `<div class="scroll${rows.length <= short ? " short" : ""}"><table><caption>${escapeText(caption)}</caption><thead><tr>${head}</tr></thead><tbody>${body}</tbody></table></div>`;
}

/** A section under a heading; left out where it has nothing to say. */
export function section(id: string, heading: string, parts: readonly Html[]): Html {
  const body = parts.join("");
  return body === "" ? "" : `<section id="${id}"><h2>${escapeText(heading)}</h2>${body}</section>`;
}

const spaceBeforeUnit = /(\d)[ \u2009](?=%|°|(?:[kmµcM]?(?:L|g|m|s|mol|W|K|Pa|J)|min|h|d|m³|degC)(?![\p{L}\d]))/gu;

/** Words of a page: a number is not parted from its unit at the end of a line. */
export const prose = (words: string): Html => escapeText(words.replace(spaceBeforeUnit, "$1\u00a0"));

export const paragraph = (words: string, kind?: string): Html =>
  `<p${kind ? ` class="${kind}"` : ""}>${prose(words)}</p>`;

export function list(items: readonly string[], ordered = false): Html {
  if (items.length === 0) return "";
  const tag = ordered ? "ol" : "ul";
  return `<${tag}>${items.map((i) => `<li>${prose(i)}</li>`).join("")}</${tag}>`;
}

/** Terms with what they mean. */
export function terms(pairs: readonly (readonly [term: string, says: string])[]): Html {
  if (pairs.length === 0) return "";
  return `<dl>${pairs.map(([t, s]) => `<div class="together"><dt>${escapeText(t)}</dt><dd>${prose(s)}</dd></div>`).join("")}</dl>`;
}

/** Tables beside one another where there is room. */
export function beside(tables: readonly Html[]): Html {
  const told = tables.filter((t) => t !== "");
  return told.length === 0 ? "" : `<div class="beside">${told.join("")}</div>`;
}

/** Figures in columns; wide ones across all. */
export const figures = (list: readonly Figure[]): Html =>
  list.length === 0 ? "" : `<div class="figures">${list.map(figure).join("")}</div>`;

/** A drawing with its caption and, for the page's script, the numbers behind it. */
export function figure({ name, drawing, caption, data }: Figure): Html {
  const numbers = data ? `<script type="application/json">${embeddedJson(embedded(name, data))}</script>` : "";
  return `<figure id="figure-${escapeText(name)}"${isWide(drawing) ? ' class="wide"' : ""} data-name="${escapeText(name)}"><div class="drawing">${onPage(drawing)}</div><figcaption>${prose(caption)}</figcaption>${numbers}</figure>`;
}

/** Drawings that are wider than a column take the whole page. */
const isWide = (drawing: Svg): boolean =>
  Number(/^<svg [^>]*? width="([\d.]+)"/.exec(drawing)?.[1] ?? 0) > columnWidth + 40;

/** A drawing without the style and definitions that all drawings of a page share (`sharedDrawing`). */
const onPage = (drawing: Svg): Svg => drawing.replace(/<style>[^<]*<\/style>(<defs>.*?<\/defs>)?/, "");

/** What all drawings of a page share, once: style, gradients, hatching. */
export const sharedDrawing: Html = `<svg class="bm" width="0" height="0" style="position:absolute" aria-hidden="true"><style>${drawingStyle("auto")}</style>${drawingDefinitions()}</svg>`;

function cellWords(cell: Cell): Html {
  if (typeof cell === "string") return prose(cell);
  if ("code" in cell) return `<code>${escapeText(cell.code)}</code>`;
  return `${prose(cell.words)}<br><span class="under">${prose(cell.under)}</span>`;
}
