import type { Plant } from "../../compile/plant.js";
import type { DiversionWindow } from "../../study/diversion.js";
import type { StudyResult } from "../../study/result.js";
import { dimensions } from "../../units/dimension.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";

/** Whose rule the window follows, and what it is not. */
export const diversionRule =
  "Begins before 95 % and ends after 95 % of the draws that get there. Whether product may be released is for validated procedures to say, not for this.";

/**
 * When to turn away what leaves, in one sentence.
 * @param delay s, of an analyser that is counted in
 */
export function diversionWords(
  { network }: Plant,
  { line, window, draws }: DiversionWindow,
  delay: number,
  time: Unit,
): string {
  const what = line.text.replace(/^time /, "");
  if (!window) return `divert for '${what}': no draw of ${draws} gets there`;
  const { from, to, touched, volume, stillAtEnd } = window;
  const left = formatQuantity(volume, network.units.unitFor(dimensions.volume));
  const late = delay > 0 ? `, an analyser that is ${formatQuantity(delay, time)} late counted in` : "";
  const still =
    stillAtEnd > 0
      ? `; in ${formatNumber(100 * stillAtEnd, 3)} % of these it is still ${line.limit?.side ?? "beyond"} when the run ends: no window ends there`
      : "";
  return `divert for '${what}': from ${formatQuantity(from, time)} to ${formatQuantity(to, time)}, ${left} turned away${late}; ${formatNumber(100 * touched, 3)} % of ${draws} draws get there${still}`;
}

/** Windows of a study's duties that go on in time, by duty and rival, with their rule. */
export function studyDiversionWords({ predictions, ranking }: StudyResult): string[] {
  const named = ranking.filter((r) => r.survives).length > 1;
  const said = predictions.flatMap(({ duty, rival, plant, diversion, unit }) =>
    diversion
      ? [`${duty.title}${named ? ` (by '${rival.network.title}')` : ""}: ${diversionWords(plant, diversion, 0, unit)}.`]
      : [],
  );
  return said.length > 0 ? [...said, diversionRule] : [];
}
