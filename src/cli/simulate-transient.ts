import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import { isClosed, type Network } from "../model/network.js";
import { networkSettings } from "../reaction/conditions.js";
import { temperatureUnit } from "../reaction/figures.js";
import { speciesUnits } from "../reaction/species-units.js";
import { dutyCautions } from "../report/duty-cautions.js";
import { plotTransient } from "../report/study/transient-figure.js";
import { type DiversionWindow, diversionWindows } from "../study/diversion.js";
import { drawsOf } from "../study/draws-of.js";
import type { Operation } from "../study/operate.js";
import { rowsFor } from "../study/sources.js";
import { transientFigures } from "../transient/figures.js";
import { asksForTime, worthSeeing } from "../transient/in-time.js";
import { closes, type Transient, transient } from "../transient/transient.js";
import { formatQuantity } from "../units/format.js";
import { inUnit } from "../units/unit.js";
import type { Context } from "./context.js";
import { columnsCsv } from "./csv.js";
import { diversionJson, diversionText } from "./diversion-text.js";
import { drawnAs } from "./drawn-as.js";
import { dutyFor } from "./duty-for.js";
import { transientJson } from "./json/transient.js";
import { type Outcome, UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";
import { requirePlace, settingsBeside } from "./settings.js";
import type { SimulateOptions } from "./simulate-options.js";
import { curvesOn } from "./text/plot.js";
import { blocks } from "./text/table.js";
import { transientText } from "./text/transient.js";
import { type Clock, clockFrom, oneTime } from "./times.js";

/** `simulate --duty --transient`: a duty in time. */
export async function simulateTransient(
  network: Network,
  options: SimulateOptions,
  { inputs, io }: Context,
): Promise<Outcome> {
  const { set, duty } = settingsBeside(network, options.set, dutyFor(inputs, options.duty ?? "", network, true));
  const plant = plantAt(network, { ...networkSettings(duty), ...set });
  for (const name of options.at ?? []) requirePlace(name, plant.exit, "--at");
  if (options.funnel) return (await import("./simulate-funnel.js")).simulateFunnel(plant, duty, options, { io });
  const clock = clockFrom(options, network.units.time, () => {
    if (isClosed(network))
      throw new UsageError("a closed vessel's curve has no end: say how long with --until or --times");
    return worthSeeing(plant, duty);
  });
  const places = network.compartments.map((c) => c.name).filter((name) => plant.exit.has(name));
  const run = transient(plant, duty.chemistry, duty, clock.si, {
    at: [...new Set([...places, ...(options.at ?? [])])],
  });
  const figures = transientFigures(plant, duty, run);
  const { output } = options;
  const units = speciesUnits(network, duty, run.species);
  const shown = { time: clock.unit, species: units };
  if (output !== undefined) {
    const made = /\.csv$/i.test(output)
      ? curvesCsv(plant, duty, run, clock)
      : await drawnAs(output, (drawn) => plotTransient(plant, duty, run, shown, drawn));
    io.write(output, made);
  }
  const diverted = run.stopped ? undefined : windows({ network, duty, values: set, kinetics: new Map() }, options);
  const { stopped, balance } = run;
  const open = balance !== undefined && balance.off > closes;
  return {
    status: stopped || open ? 3 : 0,
    text: blocks(
      transientText(plant, duty, run, figures, clock, options.at ?? []),
      curvesOn(io, () =>
        run.outlets.flatMap(({ name, values }) =>
          run.species.map((s, i) => ({
            label: `${s} at ${name}`,
            x: clock.shown,
            xUnit: clock.unit.name,
            y: Float64Array.from(clock.shown, (_, k) => inUnit(values[k * run.species.length + i], units[i])),
            yUnit: units[i].name,
          })),
        ),
      ),
      diverted ? diversionText(plant, diverted.found, diverted.delay, clock.unit) : "",
      output === undefined ? "" : `  curves: ${output}`,
    ),
    json: {
      ok: !stopped && !open,
      duty: duty.title,
      ...transientJson(plant, duty, run, figures, clock),
      cautions: dutyCautions(duty).map((c) => c.says),
      ...(diverted ? { diversion: diversionJson(plant, diverted.found, clock.unit) } : {}),
      ...(output === undefined ? {} : { written: output }),
    },
    notes: stopped
      ? [
          stopped.why === "no steady state"
            ? `backmix: the steady state to start from did not converge, worst in ${stopped.node}; give \`contents:\` to start from something else`
            : `backmix: stopped at ${formatQuantity(stopped.t, clock.unit)} in ${stopped.node} (${stopped.why.replaceAll("-", " ")}): concentrations change too fast there to be followed; later values are left empty`,
        ]
      : open
        ? [
            "backmix: the balances of this run do not close; its figures are not to be relied on (see the warning above); please report the files",
          ]
        : [],
  };
}

/** When to divert, from draws of all that has a `±`, where that is asked. */
function windows(
  operation: Operation,
  { draws, delay }: SimulateOptions,
): { found: DiversionWindow[]; delay: number } | undefined {
  if (draws === undefined) {
    if (delay !== undefined) throw new UsageError("--delay goes with --draws");
    return undefined;
  }
  if (!asksForTime(operation.duty))
    throw new UsageError("--draws needs a limit, such as `report: [time A at product above 0.2 mol/L]`");
  const { settings } = drawsOf(operation.network, undefined, draws, seed);
  const late = delay === undefined ? 0 : oneTime(delay, "--delay", '"30 s"').si;
  return { found: diversionWindows(operation, rowsFor(operation, settings, seed), late), delay: late };
}

/** Of the draws. */
const seed = 1;

/** A row per place and time, a column per species. */
function curvesCsv({ network }: Plant, duty: Duty, run: Transient, { shown, unit }: Clock): string {
  const { species, outlets, places } = run;
  const units = speciesUnits(network, duty, species);
  const n = species.length;
  const courses = [...outlets, ...places];
  const warm = temperatureUnit(duty);
  const heated = courses.some((c) => c.temperatures) ? [`temperature [${warm.name}]`] : [];
  const header = [
    "leaving",
    `time [${unit.name}]`,
    ...species.map((s, i) => `${s} [${units[i].name || "1"}]`),
    ...heated,
  ];
  const at = (row: number) => courses[Math.floor(row / shown.length)];
  return columnsCsv(
    header,
    courses.length * shown.length,
    (row) => at(row).name,
    (row, column) => {
      const k = row % shown.length;
      if (column > n) return inUnit(at(row).temperatures?.[k] ?? Number.NaN, warm);
      return column === 0 ? shown[k] : inUnit(at(row).values[k * n + column - 1], units[column - 1]);
    },
  );
}
