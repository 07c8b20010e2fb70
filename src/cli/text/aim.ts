import { chance } from "../../report/digits.js";
import { dutyCautions } from "../../report/duty-cautions.js";
import { aimText as aimLine, aimWords } from "../../report/study/aim-words.js";
import type { AimResult } from "../../study/aim.js";
import type { Operation } from "../../study/operate.js";
import { formatQuantity } from "../../units/format.js";
import { peopleUnit } from "./people.js";
import { blocks, table, wrap } from "./table.js";

/** What an aim came to: the answer in words, then each value with what it gives. */
export function aimText({ network, duty }: Operation, found: AimResult, carries: string): string {
  const { aim, range, crossings, best, confidence } = found;
  const { input } = range;
  const rows = (crossings.length > 0 ? crossings : best ? [best] : []).map(({ at, figure, share, kept }) => {
    const unit = peopleUnit(aim.line.what, figure.unit) ?? figure.unit;
    return [
      formatQuantity(at, input.unit, 6),
      figure.why ?? formatQuantity(figure.value, unit),
      ...(kept === undefined ? [] : [Number.isFinite(kept) ? formatQuantity(kept, unit) : ""]),
      ...(share === undefined ? [] : [chance(share)]),
    ];
  });
  const right = (title: string) => ({ title, align: "right" as const });
  const percent = confidence === undefined ? "" : `${Number((100 * confidence).toPrecision(4))} %`;
  return blocks(
    `${network.title}: ${duty.title}, ${aimLine(aim.text)} by ${input.name}`,
    aimWords(found)
      .map((line) => wrap("  ", line))
      .join("\n"),
    table(
      [
        right(input.name),
        right(aim.line.text),
        ...(confidence === undefined ? [] : [right(`${percent} of the draws keep`)]),
        ...(rows[0]?.length > (confidence === undefined ? 2 : 3) ? [right("draws that meet the aim")] : []),
      ],
      rows,
    ),
    carries === "" ? "" : wrap("  ", `draws carry ${carries}`),
    dutyCautions({ ...duty, report: [...duty.report, aim.line] })
      .map(({ says }) => wrap("  caution: ", says))
      .join("\n"),
  );
}
