import { type Html, paragraph, prose, section, terms } from "../html.js";
import type { ReportFinding, StudyReport } from "../input.js";

/** What the tests show, with evidence, what could fake it and the next check; then what they do not show. */
export function findingsSection({ findings, notSupported, data: tested }: StudyReport): Html {
  // Where nothing was tested there is nothing to find.
  if (tested.length === 0 && findings.length === 0) return "";
  const found =
    findings.length > 0 ? findings.map(findingBlock) : [paragraph("The data show nothing that needs a finding.")];
  const told = notSupported.map(({ what, says }) => [what, says.join(". ")] as const);
  const not = told.length > 0 ? `<h3>What the curves alone, without a model, do not show</h3>${terms(told)}` : "";
  return section("findings", "Findings", [...found, not]);
}

/** One finding with what speaks for it, what could fake it, and the next check. */
export function findingBlock(f: ReportFinding): Html {
  const lines: (readonly [string, string | undefined])[] = [
    ["Evidence", f.evidence],
    ["Could also be", f.couldBe],
    ["Next check", f.next],
  ];
  const said = lines.flatMap(([name, says]) =>
    says ? [`<p><span class="quiet">${name}:</span> ${prose(says)}</p>`] : [],
  );
  return `<div class="finding">${paragraph(f.message)}${said.join("")}</div>`;
}
