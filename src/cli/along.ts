import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import { temperatureUnit } from "../reaction/figures.js";
import { type Profile, profilesAlong } from "../reaction/profile.js";
import { speciesUnits } from "../reaction/species-units.js";
import type { SteadyState } from "../reaction/steady.js";
import { plotAlong } from "../report/study/along-figure.js";
import { inUnit } from "../units/unit.js";
import { columnsCsv } from "./csv.js";
import type { Io } from "./io.js";
import { UsageError } from "./outcome.js";

/**
 * Writes what the liquid is like along tubes and dispersed bodies to F.csv, F.svg or F.png.
 * @throws UsageError for another ending, or where the network has no such body
 */
export async function writeAlong(io: Io, file: string, plant: Plant, duty: Duty, state: SteadyState): Promise<void> {
  const ending = /\.(\w+)$/.exec(file)?.[1].toLowerCase() ?? "";
  if (!["csv", "svg", "png"].includes(ending)) throw new UsageError(`--along '${file}': write to .csv, .svg or .png`);
  const profiles = profilesAlong(plant, duty.chemistry, duty, state);
  if (profiles.length === 0) {
    throw new UsageError("--along: no body of this network has a line along it (`tubular` and `dispersed` have)");
  }
  if (ending === "csv") return io.write(file, alongCsv(plant, duty, state, profiles));
  const options = ending === "png" ? ({ theme: "light" } as const) : {};
  const { drawing } = plotAlong(plant, duty, state.species, profiles, options);
  io.write(file, ending === "png" ? await (await import("./png.js")).pngOf(drawing) : `${drawing}\n`);
}

function alongCsv({ network }: Plant, duty: Duty, { species }: SteadyState, profiles: readonly Profile[]): string {
  const units = speciesUnits(network, duty, species);
  const warmth = temperatureUnit(duty);
  const heated = profiles.some((p) => p.temperature);
  const header = [
    "body",
    "share of its volume passed",
    ...species.map((s, i) => `${s} [${units[i].name || "1"}]`),
    ...(heated ? [`temperature [${warmth.name}]`] : []),
  ];
  const rows = profiles.flatMap((p) => Array.from(p.passed, (_, k) => ({ p, k })));
  return columnsCsv(
    header,
    rows.length,
    (row) => rows[row].p.name,
    (row, column) => {
      const { p, k } = rows[row];
      if (column === 0) return p.passed[k];
      if (column > species.length) return inUnit(p.temperature?.[k] ?? Number.NaN, warmth);
      return inUnit(p.concentrations[column - 1][k], units[column - 1]);
    },
  );
}
