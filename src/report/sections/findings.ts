import { escapeText } from "../../svg/svg.js";
import { type Html, list, paragraph, section } from "../html.js";
import type { ReportFinding, StudyReport } from "../input.js";

/** What the tests show, with evidence, what could fake it and the next check; then what they do not show. */
export function findingsSection({ findings, notSupported }: StudyReport): Html {
  const found =
    findings.length > 0 ? findings.map(findingOf) : [paragraph("The data show nothing that needs a finding.")];
  const not = notSupported.length > 0 ? `<h3>What the data do not support</h3>${list(notSupported)}` : "";
  return section("findings", "Findings", [...found, not]);
}

function findingOf(f: ReportFinding): Html {
  const lines: (readonly [string, string | undefined])[] = [
    ["Evidence", f.evidence],
    ["Could also be", f.couldBe],
    ["Next check", f.next],
  ];
  const said = lines.flatMap(([name, says]) =>
    says ? [`<p><span class="quiet">${name}:</span> ${escapeText(says)}</p>`] : [],
  );
  return `<div class="finding">${paragraph(f.message)}${said.join("")}</div>`;
}
