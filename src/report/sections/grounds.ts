import { escapeText } from "../../svg/svg.js";
import { cautionsFor } from "../cautions.js";
import { type Html, list, paragraph, section, table, terms } from "../html.js";
import type { StudyReport } from "../input.js";

/** What was tested and what is taken for granted. */
export function assumptionsSection({ assumptions, tested }: StudyReport): Html {
  return section("assumptions", "Assumptions", [
    list(assumptions),
    tested.length > 0 ? `<h3>What was tested</h3>${list(tested)}` : "",
  ]);
}

/** What the numbers must not be used for without more. */
export function cautionsSection({ cautions }: StudyReport): Html {
  return section("cautions", "Cautions", [terms(cautionsFor(cautions).map((c) => [c.about, c.says]))]);
}

/** Files with their hashes, seed, version, command: what makes the same numbers again. */
export function provenanceSection({ provenance: p }: StudyReport): Html {
  return section("provenance", "Where it comes from", [
    `<p><code>${escapeText(p.command)}</code></p>`,
    paragraph(`backmix ${p.version}, seed ${p.seed}. The same files, seed and version give the same numbers.`),
    table(
      "Files that were read",
      [{ head: "file" }, { head: "SHA-256" }],
      p.files.map((f) => [{ code: f.path }, { code: f.sha256 }]),
    ),
  ]);
}
