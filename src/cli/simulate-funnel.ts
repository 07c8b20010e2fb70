import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import { speciesUnits } from "../reaction/species-units.js";
import { plotFunnel } from "../report/study/transient-figure.js";
import { type Funnel, type FunnelFault, funnelOf } from "../transient/funnel.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import { inUnit, type Unit } from "../units/unit.js";
import type { Context } from "./context.js";
import { columnsCsv } from "./csv.js";
import { drawnAs } from "./drawn-as.js";
import { quantity } from "./json/quantity.js";
import { type Outcome, UsageError } from "./outcome.js";
import type { SimulateOptions } from "./simulate-options.js";
import { blocks, table } from "./text/table.js";
import { clockFrom } from "./times.js";

const faults: Readonly<Record<FunnelFault, string>> = {
  "no-upset": "--funnel needs a duty with an upset, such as `feeds: {feed: {A: {from: 1 mol/L, to: 1.3 mol/L}}}`",
  "not-an-upset-of-a-feed":
    "--funnel is for an upset of what a feed brings, such as `feeds: {feed: {A: {from: 1 mol/L, to: 1.3 mol/L}}}`; the duty has only a flow or a logged feed that changes: see what that does without --funnel",
  "several-upsets": "--funnel looks at one upset, and the duty has several",
  "no-limit": "--funnel needs a limit, such as `report: [time A at product above 0.2 mol/L]`",
  "beyond-already": "--funnel: the steady state before the upset is beyond the limit already",
  stopped: "--funnel: the duty cannot be followed in time; see what it does without --funnel",
};

/** `simulate --duty --transient --funnel`: how high an upset may be for how long. */
export async function simulateFunnel(
  plant: Plant,
  duty: Duty,
  options: SimulateOptions,
  { io }: Pick<Context, "io">,
): Promise<Outcome> {
  const { network } = plant;
  if (options.until !== undefined || options.points !== undefined)
    throw new UsageError("--funnel takes lengths of upsets by --times alone, if any");
  const clock = options.times === undefined ? undefined : clockFrom(options, network.units.time, () => 0);
  if (clock?.shown.some((t) => !(t > 0))) throw new UsageError("--funnel: every length must be longer than 0");
  const found = funnelOf(plant, duty, clock && [...clock.si]);
  if (typeof found === "string") throw new UsageError(faults[found]);
  const time = clock?.unit ?? network.units.time;
  const names = duty.chemistry?.species.map((s) => s.name) ?? [...(duty.feeds.get(found.feed)?.species.keys() ?? [])];
  const unit = speciesUnits(network, duty, names)[names.indexOf(found.species)];
  const { output } = options;
  if (output !== undefined) {
    const made = /\.csv$/i.test(output)
      ? funnelCsv(found, time, unit)
      : await drawnAs(output, (drawn) => plotFunnel(duty, found, { time, species: unit }, drawn));
    io.write(output, made);
  }
  return {
    status: 0,
    text: blocks(
      `${network.title}: ${duty.title}; ${found.species} in ${found.feed} is ${formatQuantity(found.before, unit)} but for an upset that brings '${found.line.text.replace(/^time /, "")}' where it is ${found.way > 0 ? "higher" : "lower"} than`,
      table(
        [
          { title: `lasting, ${time.name}`, align: "right" },
          { title: `${found.species}, ${unit.name}`, align: "right" },
          { title: "from what is usual", align: "right" },
        ],
        found.points.map(({ lasting, level }) => [
          formatNumber(inUnit(lasting, time), 3),
          level === undefined ? "any" : formatNumber(inUnit(level, unit)),
          level === undefined || !(found.before > 0) ? "" : signed(level / found.before - 1),
        ]),
      ),
      `  ${found.linear ? "By the answer to a step: heights only scale it." : "Each length followed through the whole network: heights do not just scale the answer."}`,
      "  A limit curve is of this vessel as modelled, from its steady state and with steady flows; alarms need a margin for what is unsure, and for the delay of the analyser.",
      output === undefined ? "" : `  written: ${output}`,
    ),
    json: {
      ok: true,
      duty: duty.title,
      funnel: {
        feed: found.feed,
        species: found.species,
        limit: found.line.text,
        before: quantity(found.before, unit),
        linear: found.linear,
        points: found.points.map(({ lasting, level }) => ({
          lasting: quantity(lasting, time),
          level: quantity(level, unit, "infinite"),
        })),
      },
      ...(output === undefined ? {} : { written: output }),
    },
  };
}

const signed = (share: number): string => `${share > 0 ? "+" : ""}${formatNumber(100 * share, 3)} %`;

function funnelCsv({ points, species }: Funnel, time: Unit, unit: Unit): string {
  return columnsCsv(
    ["of", `lasting [${time.name}]`, `${species} [${unit.name || "1"}]`],
    points.length,
    () => species,
    (row, column) => {
      const { lasting, level } = points[row];
      return column === 0 ? inUnit(lasting, time) : level === undefined ? Number.NaN : inUnit(level, unit);
    },
  );
}
