import { escapeText } from "../svg/svg.js";
import { type Html, prose, sharedDrawing } from "./html.js";
import type { AnswerLine, StudyReport } from "./input.js";
import { reportScript } from "./page/script.js";
import { reportStyle } from "./page/style.js";
import { sections } from "./sections.js";

/**
 * The report of a study as one HTML page that needs nothing else: style, drawings, numbers and script inside, no network.
 * It reads from the answer down to where everything comes from, prints on A4 and Letter, and follows a dark screen.
 */
export function writeReport(report: StudyReport): Html {
  const body = sections.map((part) => part(report)).filter((part) => part !== "");
  return [
    "<!doctype html>",
    `<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1">`,
    `<title>${escapeText(report.title)}</title><style>${reportStyle}</style></head><body>`,
    `<a class="skip" href="#answer">To the answer</a>`,
    sharedDrawing,
    `<header><h1>${escapeText(report.title)}</h1>${contents(body)}</header>`,
    `<main>${answer(report.answer)}`,
    ...body,
    "</main>",
    `<footer>backmix ${escapeText(report.provenance.version)}</footer><script>${reportScript}</script></body></html>`,
    "",
  ].join("\n");
}

/** What the reader came for, each line under what it is about; lines about the same thing stand together. */
function answer(lines: readonly AnswerLine[]): Html {
  const said = lines.map(({ about, says }, k) => {
    const head = about === lines[k - 1]?.about ? "" : `<dt>${escapeText(about)}</dt>`;
    return `${head}<dd>${prose(says)}</dd>`;
  });
  return `<section id="answer" class="answer" tabindex="-1" aria-label="The answer"><dl>${said.join("")}</dl></section>`;
}

/** Links to the sections that are there. */
function contents(body: readonly Html[]): Html {
  const links = body.flatMap((part) => {
    const found = /^<section id="([^"]*)"><h2>(.*?)<\/h2>/.exec(part);
    return found ? [`<a href="#${found[1]}">${found[2]}</a>`] : [];
  });
  return `<nav aria-label="Contents">${links.join(" ")}</nav>`;
}
