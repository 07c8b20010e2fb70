import { escapeText } from "../svg/svg.js";
import { type Html, list, sharedDrawing } from "./html.js";
import type { StudyReport } from "./input.js";
import { sections } from "./sections.js";
import { reportStyle } from "./style.js";

/**
 * The report of a study as one HTML page that needs nothing else: style and drawings inside, no script, no network.
 * It reads from the answer down to where everything comes from, prints on A4 and Letter, and follows a dark screen.
 */
export function writeReport(report: StudyReport): Html {
  const body = sections.map((part) => part(report)).filter((part) => part !== "");
  return [
    "<!doctype html>",
    `<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1">`,
    `<title>${escapeText(report.title)}</title><style>${reportStyle}</style></head><body>`,
    sharedDrawing,
    `<header><h1>${escapeText(report.title)}</h1>${contents(body)}</header>`,
    `<main><section class="answer" aria-label="The answer">${list(report.answer, true)}</section>`,
    ...body,
    "</main>",
    `<footer>backmix ${escapeText(report.provenance.version)}</footer></body></html>`,
    "",
  ].join("\n");
}

/** Links to the sections that are there. */
function contents(body: readonly Html[]): Html {
  const links = body.flatMap((part) => {
    const found = /^<section id="([^"]*)"><h2>(.*?)<\/h2>/.exec(part);
    return found ? [`<a href="#${found[1]}">${found[2]}</a>`] : [];
  });
  return `<nav aria-label="Contents">${links.join(" ")}</nav>`;
}
