import type { Balance } from "../../simulate/respond.js";
import type { TracerReading } from "../../simulate/tracer.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { squared } from "../units.js";
import { table } from "./table.js";

/** Moments of residence time at each place, and how much of the tracer leaves there. */
export function momentsTable(readings: readonly Pick<TracerReading, "at" | "moments">[], unit: Unit): string {
  const right = (title: string) => ({ title, align: "right" as const });
  return table(
    [
      { title: "at" },
      right("share"),
      right(`mean, ${unit.name}`),
      right(`variance, ${squared(unit).name}`),
      right("skewness"),
      right("variance/mean^2"),
    ],
    readings.map(({ at, moments: { share, mean, variance, skewness } }) => [
      at,
      `${formatNumber(100 * share)} %`,
      formatNumber(inUnit(mean, unit), 5),
      formatNumber(inUnit(variance, squared(unit)), 5),
      skewness === undefined ? "" : formatNumber(skewness),
      formatNumber(variance / mean ** 2),
    ]),
  );
}

/** The balance in one line. */
export function balanceLine({ injected, left, inside, closure }: Balance, unit: Unit): string {
  const say = (amount: number): string => formatQuantity(amount, unit, 5);
  return `  tracer balance: injected ${say(injected)}, left ${say(left)}, inside ${say(inside)}; closure ${formatNumber(closure, 1)}`;
}

/** A share in %, or, in a closed vessel, a time. */
const areaText = (area: number, unit: Unit): string =>
  unit.name === "" ? `${formatNumber(100 * area)} %` : formatQuantity(area, unit);

const mostSpikes = 8;

/** Undispersed tracer: the largest few spikes. */
export function spikesText(readings: readonly TracerReading[], unit: Unit, areaUnit: Unit): string {
  const all = readings.flatMap((r) => r.spikes.map((s) => ({ ...s, at: r.at })));
  if (all.length === 0) return "";
  const shown = [...all].sort((a, b) => b.area - a.area).slice(0, mostSpikes);
  const rows = shown.map((s) => [s.at, formatNumber(inUnit(s.time, unit)), areaText(s.area, areaUnit)]);
  const text = table(
    [{ title: "undispersed at" }, { title: `time, ${unit.name}`, align: "right" }, { title: "area", align: "right" }],
    rows,
  );
  return all.length > shown.length ? `${text}\n  and ${all.length - shown.length} smaller ones` : text;
}
