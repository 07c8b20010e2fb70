import { type Html, paragraph, section, table } from "../html.js";
import type { StudyReport } from "../input.js";
import { regulatedCaution } from "../study/regulated-words.js";

/** Figures of a regulator's method, apart from what is predicted. */
export function regulatedSection({ regulated }: StudyReport): Html {
  if (regulated.length === 0) return "";
  const columns = [
    { head: "" },
    { head: "value", number: true },
    { head: "at least, with 95 %", number: true },
    { head: "from" },
  ];
  return section("regulated", "Regulated figures", [
    paragraph(regulatedCaution),
    ...regulated.map(({ about, lines }) =>
      table(
        about,
        columns,
        lines.map((l) => [l.name, l.value, l.lower ?? "", l.from]),
      ),
    ),
  ]);
}
