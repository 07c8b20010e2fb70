import type { Plant } from "../../compile/plant.js";
import type { Duty } from "../../model/duty.js";
import { figuresOf, temperatureUnit } from "../../reaction/figures.js";
import type { FoundState, StatesFound } from "../../reaction/states.js";
import { cautionsFor } from "../../report/cautions.js";
import { filled } from "../../report/study/states-words.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { reportedText } from "./steady.js";
import { blocks, pairs, table, wrap } from "./table.js";

/** All steady states that were found, and what to make of them. Nothing where there was nothing to search. */
export function statesText(plant: Plant, duty: Duty, found: StatesFound | undefined): string {
  const caution = duty.heat ? wrap("  caution  ", heatCaution) : "";
  if (!found || (found.states.length === 0 && found.left.length === 0)) return caution;
  const { states, left } = found;
  const unsearched = left.length > 0 ? `not searched: ${left.join(", ")}` : "";
  if (states.length <= 1) {
    const [only] = states;
    const says = only
      ? `one found from many starts${stabilityOf(only, plant) === "" ? "" : `, ${stabilityOf(only, plant)}`}`
      : "none found";
    const line = [says, unsearched].filter((t) => t !== "").join("; ");
    return blocks(pairs([["steady states", line]]), caution);
  }
  const warm = duty.heat ? temperatureUnit(duty) : undefined;
  const asked = new Set(duty.report.flatMap((line) => (line.what === "temperature" ? [line.at] : [])));
  const shown = (o: { readonly name: string; readonly flow: number }): boolean => o.flow > 0 && !asked.has(o.name);
  const outlets = plant.outlets.filter(shown);
  const columns = [
    { title: "state" },
    ...duty.report.map((line) => ({ title: line.text, align: "right" as const })),
    ...(warm ? outlets.map((o) => ({ title: `${o.name}, ${warm.name}`, align: "right" as const })) : []),
    { title: "after a small disturbance" },
  ];
  const rows = states.map((s, k) => [
    `${k + 1}${s.reached ? " *" : ""}`,
    ...figuresOf(plant, duty, s.state).map(reportedText),
    ...(warm ? s.state.outlets.filter(shown).map((o) => formatNumber(inUnit(o.temperature ?? Number.NaN, warm))) : []),
    stabilityOf(s, plant) || "not judged",
  ]);
  const starred = states.some((s) => s.reached)
    ? `  * where ${filled(duty.contents)} runs to; the others are reached by another start or an upset`
    : "";
  const says = `  ${states.length} steady states found from many starts${unsearched ? ` (${unsearched})` : ""}: which one the vessel runs at depends on how it came there.${states.every((x) => x.stable === false) ? " None of them is stable: it swings." : ""}`;
  return blocks(says, [table(columns, rows), starred].filter((t) => t !== "").join("\n"), caution);
}

const heatCaution = cautionsFor({ heat: true }).find((c) => c.about === "Heat")?.says ?? "";

/** What a small disturbance does, with how fast. */
function stabilityOf({ stable, mode }: FoundState, plant: Plant): string {
  if (stable === undefined || !mode) return "";
  if (mode.rough) return stable ? "stable" : "unstable";
  const minutes: Unit = plant.network.units.time;
  const time = formatQuantity(Math.abs(1 / mode.growth), minutes, 2);
  const swings = mode.swing > 0 ? ", swinging" : "";
  return stable ? `stable: fades e-fold in ${time}${swings}` : `unstable: grows e-fold in ${time}${swings}`;
}
