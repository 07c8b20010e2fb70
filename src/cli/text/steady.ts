import type { Plant } from "../../compile/plant.js";
import type { Duty } from "../../model/duty.js";
import { type Figure, temperatureUnit } from "../../reaction/figures.js";
import type { HeatBalance } from "../../reaction/heat-balance.js";
import type { Prediction } from "../../reaction/prediction.js";
import { speciesUnits } from "../../reaction/species-units.js";
import { changes } from "../../transient/course-line.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { inUnit } from "../../units/unit.js";
import { kilowatt } from "../heat.js";
import { blocks, pairs, table } from "./table.js";

/** The steady state of a duty, for people. */
export function steadyText(plant: Plant, duty: Duty, prediction: Prediction): string {
  const { state: steady } = prediction;
  const { species } = steady;
  const units = speciesUnits(plant.network, duty, species);
  const n = species.length;
  const warm = steady.temperatures && temperatureUnit(duty);
  const row = (name: string, concentrations: ArrayLike<number>, temperature: number | undefined): string[] => [
    name,
    ...species.map((_, i) =>
      Number.isNaN(concentrations[i]) ? "no flow" : formatNumber(inUnit(concentrations[i], units[i])),
    ),
    ...(warm
      ? [temperature === undefined || Number.isNaN(temperature) ? "" : formatNumber(inUnit(temperature, warm))]
      : []),
  ];
  const bodies = plant.network.compartments.flatMap((c) => {
    const node = plant.exit.get(c.name);
    return node === undefined
      ? []
      : [row(c.name, steady.concentrations.subarray(node * n, node * n + n), steady.temperatures?.[node])];
  });
  const worst = steady.closure.reduce((most, c) => Math.max(most, Math.abs(c)), 0);
  const at = duty.temperature
    ? [["temperature", formatQuantity(duty.temperature.of([]), temperatureUnit(duty))] as const]
    : [];
  return blocks(
    `${plant.network.title}: ${duty.title}${steady.converged ? "" : " (not converged: best found)"}`,
    changes(duty) ? "  the steady state before the change that the duty tells of; --transient follows the change" : "",
    // Where nothing is carried there is nothing to tell of places.
    species.length === 0 && !warm
      ? ""
      : table(
          [
            { title: "leaving" },
            ...species.map((s, i) => ({
              title: units[i].name ? `${s}, ${units[i].name}` : s,
              align: "right" as const,
            })),
            ...(warm ? [{ title: `temperature, ${warm.name}`, align: "right" as const }] : []),
          ],
          [
            ...steady.feeds.map((f) => row(f.name, f.concentrations, f.temperature)),
            ...bodies,
            ...steady.outlets.map((o) => row(o.name, o.concentrations, o.temperature)),
          ],
        ),
    figuresText(prediction),
    pairs([
      ...at,
      ...(steady.heat ? heatLines(steady.heat) : []),
      [
        "balances",
        `every species closes to ${formatNumber(worst, 1)}, what no reaction changes to ${formatNumber(steady.conserved, 1)}, every node to ${formatNumber(steady.residual, 1)}`,
      ],
    ]),
  );
}

/** Where the heat goes, in words. */
function heatLines({ released, walls, exchanged, carried, closure }: HeatBalance): (readonly [string, string])[] {
  const kW = (watt: number): string => formatQuantity(Math.abs(watt), kilowatt);
  const parts = [
    `reactions ${released < 0 ? "take up" : "set free"} ${kW(released)}`,
    ...walls.map(
      ({ place, gained }) => `the jacket of ${place} ${gained < 0 ? "takes out" : "brings in"} ${kW(gained)}`,
    ),
    `the streams carry ${carried < 0 ? "in" : "out"} ${kW(carried)}`,
  ];
  const passed = exchanged.map(
    (e) =>
      [
        "heat exchange",
        `${e.outlet} ${e.passed < 0 ? "cools" : "warms"} ${e.feed} by ${kW(e.passed)}, which stays in the vessel`,
      ] as const,
  );
  return [...passed, ["heat", `${parts.join(", ")}; closes to ${formatNumber(Math.abs(closure), 1)}`]];
}

const asPercent = /^(conversion|yield|selectivity)/;

/** A figure as people say it: fractions in %. */
export function reportedText({ name, value, unit, why }: Figure): string {
  if (why === "infinite" && /^time /.test(name)) return "for good";
  if (why !== undefined) return /^time /.test(name) ? "in time only (--transient)" : why;
  return asPercent.test(name) ? `${formatNumber(100 * value)} %` : formatQuantity(value, unit);
}

function figuresText({ figures, bounds, premises }: Prediction): string {
  if (figures.length === 0) return "";
  const bounded = bounds.some((b) => b !== undefined);
  const right = (title: string) => ({ title, align: "right" as const });
  const rows = figures.map((f, i) => {
    const b = bounds[i];
    return [f.name, reportedText(f), ...(b ? [reportedText(b.segregated), reportedText(b.maximumMixedness)] : [])];
  });
  const columns = bounded ? [right("if segregated"), right("if mixed at once")] : [];
  const says = premises ? `  ${premises.says}` : "";
  return [table([{ title: "figure" }, right("value"), ...columns], rows), infiniteText(figures), says]
    .filter((t) => t !== "")
    .join("\n\n");
}

/** What it means that a kill is infinite; empty where none is. */
function infiniteText(figures: readonly Figure[]): string {
  const spent = figures.filter((f) => f.why === "infinite" && f.name.startsWith("log-removal"));
  return spent.length === 0
    ? ""
    : `  ${spent.map((f) => f.name).join(", ")}: infinite, since in this model nothing at all of it leaves. A test shows no more than down to its limit of detection.`;
}
