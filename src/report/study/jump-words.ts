import type { Reported } from "../../model/duty.js";
import type { Input } from "../../study/inputs.js";
import type { JumpFound } from "../../study/jumps.js";
import type { Sweep, SweepJump } from "../../study/sweep.js";
import type { WashOutFound } from "../../study/wash-outs.js";
import { formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";

const digits = 4;
const mostTold = 4;

/** Where figures of a sweep jump, and what the vessel does there; one sentence or two for each place. */
export function sweepJumpWords({ jumps, washOuts, axes, operation, points }: Sweep): string[] {
  const [{ input }, second] = axes;
  const { report } = operation.duty;
  const units = points.find((p) => p.figures)?.figures?.map((f) => f.unit) ?? [];
  const told = jumps.slice(0, mostTold).map((jump: SweepJump) => {
    const where = second
      ? ` where ${second.input.name} = ${quantity(jump.beside ?? Number.NaN, second.input.unit)}`
      : "";
    return jumpWords(jump, input, report, units, where);
  });
  const more = jumps.length - told.length;
  return [...told, ...(more > 0 ? [`There are ${more} more such places.`] : []), ...washOutWords(washOuts, input)];
}

/**
 * @param units of the figures of the report, by their line
 * @param where " where …": what else holds
 */
export function jumpWords(
  { below, above, what, lines, stays }: JumpFound,
  { name, unit }: Input,
  report: readonly Reported[],
  units: readonly Unit[],
  where = "",
): string {
  const at = quantity((below + above) / 2, unit);
  const figures = lines
    .map(({ line, before, after }) => {
      const { what: kind, text } = report[line];
      const share = ["conversion", "yield", "selectivity"].includes(kind);
      const own: Unit | undefined = share ? { ...units[line], name: "%", factor: 0.01 } : units[line];
      return own ? `${text} from ${figure(before, own)} to ${figure(after, own)}` : text;
    })
    .join(", ");
  if (what === "figure") return `A jump at ${name} = ${at}${where}: ${figures}. Nothing between is a value of it.`;
  const happens = {
    ignites: "the vessel ignites",
    "goes out": "the vessel goes out",
    changes: "the vessel goes over to another steady state",
  }[what];
  const said = [`At ${name} = ${at}${where} ${happens} as ${name} rises: ${figures}. Nothing between lasts.`];
  if (stays) {
    const { down, up } = stays;
    said.push(
      down === undefined
        ? `Once there it does not come back as ${name} falls again, as far as was looked at.`
        : down < below
          ? `Once there it stays so as ${name} falls again, down to ${quantity(down, unit)}.`
          : "",
    );
    if (up === undefined) said.push(`A vessel that runs at the state before already stays there as ${name} rises.`);
    else if (up > above)
      said.push(`A vessel that runs at the state before already stays there up to ${quantity(up, unit)}.`);
  }
  return said.filter((s) => s !== "").join(" ");
}

/** "At Q = 0.475 L/h X washes out as Q rises: …" */
export const washOutWords = (washOuts: readonly WashOutFound[], { name, unit }: Input): string[] =>
  washOuts.map(
    ({ at, of, as }) =>
      `At ${name} = ${quantity(at, unit)} ${of} washes out as ${name} ${as}: beyond it nothing of it stays. Keep away from there.`,
  );

const quantity = (si: number, unit: Unit): string => formatQuantity(si, unit, digits);

const figure = (si: number, unit: Unit): string =>
  Number.isNaN(si) ? "none" : Number.isFinite(si) ? formatQuantity(si, unit, digits) : "infinite";
