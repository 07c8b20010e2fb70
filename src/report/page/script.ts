import { readingScript } from "./reading-script.js";

/**
 * The script of a report page, as source: reads values out under the pointer and the arrow keys, saves figures as SVG and
 * their numbers as CSV. It needs nothing but the page; without it the page says the same, less handily.
 */
export const reportScript = String.raw`
"use strict";
(() => {
const svgName = document.querySelector("svg").namespaceURI;
const number = new Intl.NumberFormat("en", { maximumSignificantDigits: 4, useGrouping: false });
const say = (v) => {
  const size = Math.abs(v);
  const words = size !== 0 && (size < 1e-3 || size >= 1e6) ? v.toExponential(3) : number.format(v);
  return words.replace("-", "\u2212");
};

let hinted = false;
/** Gives the figures inside an element their buttons and readings; a live page asks for it again. */
window.readFigures = (root) => root.querySelectorAll("figure").forEach(equip);

function equip(figure) {
  const holder = figure.querySelector(".drawing");
  const source = figure.querySelector("script");
  if (!holder || figure.querySelector(".tools")) return;
  const data = source ? JSON.parse(source.textContent) : undefined;
  const name = data ? data.name : figure.dataset.name || "figure";
  const tools = document.createElement("div");
  tools.className = "tools";
  tools.append(button("Save as SVG", () => save(name + ".svg", "image/svg+xml", standAlone(holder.querySelector("svg")))));
  if (data) tools.append(button("Save data as CSV", () => save(name + ".csv", "text/csv", csv(data))));
  figure.append(tools);
  if (data && data.plots.length > 0) readable(tools, holder, data);
  else if (data && data.boxes) listed(tools, holder, data);
}

function button(words, act) {
  const made = document.createElement("button");
  made.type = "button";
  made.textContent = words;
  made.addEventListener("click", act);
  return made;
}

function save(name, type, content) {
  const link = document.createElement("a");
  link.href = URL.createObjectURL(new Blob([content], { type }));
  link.download = name;
  link.click();
  setTimeout(() => URL.revokeObjectURL(link.href), 10000);
}

/** A drawing with the page's shared style in fixed light colours, so that any program can show it. */
function standAlone(svg) {
  const copy = svg.cloneNode(true);
  for (const mark of copy.querySelectorAll(".readout")) mark.remove();
  const shared = document.querySelector("svg[aria-hidden] style").textContent;
  const light = new Map(Array.from(/\{([^}]*)\}/.exec(shared)[1].matchAll(/(--bm-\w+):([^;]+)/g), (m) => [m[1], m[2]]));
  const rules = shared
    .replace(/^\.bm\{[^}]*\}@media[^{]*\{[^}]*\}\}/, "")
    .replace(/var\((--bm-\w+)\)/g, (whole, key) => light.get(key) || whole);
  const style = document.createElementNS(svgName, "style");
  style.textContent = rules;
  const definitions = document.querySelector("svg[aria-hidden] defs").cloneNode(true);
  copy.querySelector("desc").after(style, definitions);
  return new XMLSerializer().serializeToString(copy) + "\n";
}

function csv(data) {
  const cell = (v) => {
    const words = v === null || v === undefined ? "" : String(v);
    return /[",\n]/.test(words) ? '"' + words.replaceAll('"', '""') + '"' : words;
  };
  const rows = data.rows || table(data.columns.map((k) => data.numbers[k]));
  return [data.head, ...rows].map((row) => row.map(cell).join(",")).join("\n") + "\n";
}

function table(columns) {
  const length = Math.max(0, ...columns.map((c) => c.length));
  return Array.from({ length }, (_, k) => columns.map((c) => c[k]));
}

${readingScript}

/** What scrolls sideways can be reached by the keyboard, and says what it is. */
function reachable() {
  for (const box of document.querySelectorAll(".scroll")) {
    const wide = box.scrollWidth > box.clientWidth + 1;
    if (!wide) {
      box.removeAttribute("tabindex");
      continue;
    }
    box.tabIndex = 0;
    box.setAttribute("role", "region");
    box.setAttribute("aria-label", (box.querySelector("caption") || box).textContent + ": scrolls sideways");
  }
}

window.readFigures(document);
reachable();
window.addEventListener("resize", reachable);
})();
`.trim();
