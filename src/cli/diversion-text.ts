import type { Plant } from "../compile/plant.js";
import type { DiversionWindow } from "../study/diversion.js";
import { dimensions } from "../units/dimension.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import { quantity } from "./json/quantity.js";

/** When to divert, for people. */
export function diversionText(
  { network }: Plant,
  found: readonly DiversionWindow[],
  delay: number,
  time: Unit,
): string {
  const lines = found.map(({ line, window, draws }) => {
    const what = line.text.replace(/^time /, "");
    if (!window) return `  divert for '${what}': no draw of ${draws} gets there`;
    const { from, to, touched, volume, stillAtEnd } = window;
    const left = formatQuantity(volume, network.units.unitFor(dimensions.volume));
    const late = delay > 0 ? `, an analyser that is ${formatQuantity(delay, time)} late counted in` : "";
    const still =
      stillAtEnd > 0
        ? `; in ${formatNumber(100 * stillAtEnd, 3)} % of these it is still ${line.limit?.side ?? "beyond"} when the run ends: no window ends there`
        : "";
    return `  divert for '${what}': from ${formatQuantity(from, time)} to ${formatQuantity(to, time)}, ${left} turned away${late}; ${formatNumber(100 * touched, 3)} % of ${draws} draws get there${still}`;
  });
  return [
    ...lines,
    "  Begins before 95 % and ends after 95 % of the draws that get there. Whether product may be released is for validated procedures to say, not for this.",
  ].join("\n");
}

export const diversionJson = ({ network }: Plant, found: readonly DiversionWindow[], time: Unit): object[] =>
  found.map(({ line, window, draws }) => ({
    name: line.text,
    draws,
    touched: window?.touched ?? 0,
    stillAtEnd: window?.stillAtEnd ?? 0,
    from: quantity(window?.from, time),
    to: quantity(window?.to, time),
    volume: quantity(window?.volume ?? 0, network.units.unitFor(dimensions.volume)),
  }));
