import { escapeText } from "../svg/svg.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import { inUnit, type Unit } from "../units/unit.js";
import type { Plan } from "./result.js";

/** What a sheet is about. */
export interface Titles {
  readonly network: string;
  readonly trial: string;
}

interface Part {
  readonly heading: string;
  readonly lines?: readonly string[];
  readonly table?: { readonly head: readonly string[]; readonly rows: readonly (readonly string[])[] };
}

/** A time as a stopwatch shows it, h:min:s, with tenths where it has any; a minus before the injection. */
export function samplerTime(seconds: number): string {
  const tenths = Math.round(Math.abs(seconds) * 10);
  const two = (n: number): string => String(n).padStart(2, "0");
  const [h, m, s] = [Math.floor(tenths / 36000), Math.floor(tenths / 600) % 60, Math.floor(tenths / 10) % 60];
  const rest = tenths % 10 === 0 ? "" : `.${tenths % 10}`;
  return `${seconds < 0 && tenths > 0 ? "\u2212" : ""}${h}:${two(m)}:${two(s)}${rest}`;
}

/** The sheet that goes to the field, to be printed and filled in by hand. */
function partsOf(plan: Plan, time: Unit): Part[] {
  const { dose, recommended } = plan;
  const blank = "";
  const facts: string[][] = [
    ["Date, weather, who", blank],
    ["Flow at start and end, meter", blank],
    ["Level or wetted volume, how known", blank],
    ["Temperature", blank],
    ["Tracer, batch, amount weighed", dose ? `planned: ${formatQuantity(dose.value, dose.unit)}` : blank],
    ...(dose && recommended
      ? [
          [
            "Amount that noise and tail ask for",
            `${formatQuantity(recommended.value, dose.unit, 2)} (${recommended.because})`,
          ],
        ]
      : []),
    ["Permission in writing from", blank],
    ["Injection began at (clock)", blank],
    ["Injection ended at (clock)", blank],
    ["Blank before, and at the end", blank],
    ["Stop not before", `${formatQuantity(plan.stop, time, 3)} (${samplerTime(plan.stop)}) after the injection`],
  ];
  const samples = plan.readings.map(
    (r): Part => ({
      heading: `Samples at ${r.at}`,
      table: {
        head: ["After the injection, h:min:s", "Clock", `Expected, ${r.unit.name || "1"}`, "Reading", "Remarks"],
        rows: Array.from(r.times, (t, i) => [
          samplerTime(t),
          blank,
          formatNumber(inUnit(r.expected[i], r.unit), 3),
          blank,
          blank,
        ]),
      },
    }),
  );
  return [
    { heading: "Facts of the day", table: { head: ["What", "Value"], rows: facts } },
    ...(plan.alarms.length > 0
      ? [{ heading: "Look at before you start", lines: plan.alarms.map((a) => `${a.message}: ${a.next}.`) }]
      : []),
    { heading: "Cautions", lines: plan.cautions },
    ...samples,
    { heading: "Signed", table: { head: ["Taken by", "Checked by"], rows: [[blank, blank]] } },
  ];
}

const about =
  "Times count from the injection; those below zero are the baseline. Expected values are the model's, before any test.";

export function sheetMarkdown(plan: Plan, { network, trial }: Titles, time: Unit): string {
  const cell = (text: string): string => text.replace(/\|/g, "\\|");
  const parts = partsOf(plan, time).map(({ heading, lines, table }) => {
    const body = table
      ? [
          `| ${table.head.map(cell).join(" | ")} |`,
          `|${table.head.map(() => "---").join("|")}|`,
          ...table.rows.map((r) => `| ${r.map(cell).join(" | ")} |`),
        ].join("\n")
      : (lines ?? []).map((l) => `- ${l}`).join("\n");
    return `## ${heading}\n\n${body}\n`;
  });
  return [`# ${trial}\n\n${network}. ${about}\n`, ...parts].join("\n");
}

export function sheetHtml(plan: Plan, { network, trial }: Titles, time: Unit): string {
  const parts = partsOf(plan, time).map(({ heading, lines, table }) => {
    const cells = (tag: string, r: readonly string[]): string =>
      `<tr>${r.map((c) => `<${tag}>${escapeText(c)}</${tag}>`).join("")}</tr>`;
    const body = table
      ? `<table><thead>${cells("th", table.head)}</thead><tbody>${table.rows.map((r) => cells("td", r)).join("")}</tbody></table>`
      : `<ul>${(lines ?? []).map((l) => `<li>${escapeText(l)}</li>`).join("")}</ul>`;
    return `<h2>${escapeText(heading)}</h2>${body}`;
  });
  return `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><title>${escapeText(trial)}</title><style>
body{font:11pt/1.4 system-ui,sans-serif;margin:1.5cm;color:#111}
h1{font-size:16pt;margin:0 0 .3em}h2{font-size:12pt;margin:1.2em 0 .4em;break-after:avoid}
table{border-collapse:collapse;width:calc(100% - 1px)}th,td{border:1px solid #888;padding:.25em .5em;text-align:left;height:1.6em}
th:nth-child(2):nth-last-child(4),th:nth-child(4):nth-last-child(2){width:19%}th:nth-child(5){width:28%}
thead{display:table-header-group}tr{break-inside:avoid}ul{padding-left:1.2em}
@page{size:A4;margin:1.5cm}@media print{body{margin:0}}
</style></head><body><h1>${escapeText(trial)}</h1><p>${escapeText(`${network}. ${about}`)}</p>
${parts.join("\n")}
</body></html>
`;
}
