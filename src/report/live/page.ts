import { printProblems } from "../../problems/print.js";
import { hasErrors } from "../../problems/report.js";
import { escapeText } from "../../svg/svg.js";
import { figure, type Html, sharedDrawing } from "../html.js";
import { reportScript } from "../page/script.js";
import { reportStyle } from "../page/style.js";
import type { LiveView } from "./view.js";

/** The last sound pictures of a file and when they were drawn, in words of the clock. */
export interface LastGood {
  readonly pictures: Html;
  readonly title: string;
  readonly at: string;
}

/** The page that shows files while they are being written; what it shows comes over an event stream at `/events`. */
export function livePage(paths: readonly string[]): Html {
  const places = paths.map((path, k) => `<section id="file-${k}"><h2>${escapeText(path)}</h2></section>`);
  return [
    "<!doctype html>",
    `<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1">`,
    `<link rel="icon" href="data:,">`,
    `<title>${escapeText(paths.join(", "))}</title><style>${reportStyle}${liveStyle}</style></head><body>`,
    sharedDrawing,
    `<p id="link" role="status">waiting for the program</p><main>${places.join("")}</main>`,
    `<script>${reportScript}${liveScript}</script></body></html>`,
    "",
  ].join("\n");
}

/** What a view's pictures become, with names of their own among several files. */
export function picturesOf(view: LiveView, path: string): Html {
  const stem = (path.split("/").at(-1) ?? path).replace(/\.\w+$/, "").replace(/[^\w-]/g, "-");
  return view.figures.map((f) => figure({ ...f, name: `${stem}-${f.name}` })).join("");
}

/** One file's part of the page: its state, its problems, and its pictures or the last good ones. */
export function liveSection(view: LiveView, path: string, good: LastGood | undefined, at: string): Html {
  const broken = hasErrors(view.problems);
  const errors = view.problems.filter((p) => p.severity === "error").length;
  const warnings = view.problems.length - errors;
  const counts = [
    broken ? `${errors} ${errors === 1 ? "problem" : "problems"}` : "sound",
    ...(warnings > 0 ? [`${warnings} ${warnings === 1 ? "warning" : "warnings"}`] : []),
  ].join(", ");
  const kept = broken && good ? ` The pictures are those of ${good.at}, the last that were sound.` : "";
  const problems =
    view.problems.length > 0 ? `<pre class="problems">${escapeText(printProblems(view.problems))}</pre>` : "";
  const title = broken ? (good?.title ?? path) : view.title;
  const none = good ? "" : "<p>No picture yet: the file has not been sound since watching began.</p>";
  return [
    `<h2>${escapeText(title)}</h2>`,
    `<p class="state${broken ? " broken" : ""}">${escapeText(`${path}, read at ${at}: ${counts}.${kept}`)}</p>`,
    problems,
    `<div class="pictures${broken ? " old" : ""}">${good?.pictures ?? none}</div>`,
  ].join("");
}

const liveStyle = `
#link{font-size:.85rem;color:var(--bm-quiet);margin:0}
.state{color:var(--bm-quiet)}
.state.broken{color:var(--bm-accent);font-weight:700}
.problems{font:13px/1.45 ui-monospace,Menlo,Consolas,monospace;overflow-x:auto;padding:.7rem 1rem;border-left:4px solid var(--bm-accent)}
.pictures.old{border-left:4px solid var(--bm-faint);padding-left:.8rem;filter:grayscale(1)}
`;

const liveScript = `
(() => {
const link = document.getElementById("link");
const source = new EventSource("/events");
source.onopen = () => { link.textContent = "live"; };
source.onerror = () => { link.textContent = "The program has stopped or cannot be reached; what is shown is the last that it sent."; };
source.onmessage = (event) => {
  const { file, html } = JSON.parse(event.data);
  const section = document.getElementById("file-" + file);
  const top = window.scrollY;
  section.innerHTML = html;
  window.readFigures(section);
  window.scrollTo(0, top);
};
})();
`;
