import { plantFollowing } from "../compile/sends.js";
import { followedIn, isClosed, type Network } from "../model/network.js";
import { settlingTime, tracerResponse } from "../simulate/tracer.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import { inUnit } from "../units/unit.js";
import { agesCsv } from "./ages.js";
import type { Context } from "./context.js";
import { engineBeside, engineNamed, largestDifference } from "./engines.js";
import { pure } from "./json/quantity.js";
import { tracerJson } from "./json/tracer.js";
import { type Outcome, UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";
import { progressOn } from "./progress.js";
import { requirePlace, settingsFrom } from "./settings.js";
import type { SimulateOptions } from "./simulate-options.js";
import { curvesOn } from "./text/plot.js";
import { blocks } from "./text/table.js";
import { balanceLine, momentsTable, spikesText } from "./text/tracer.js";
import { clockFrom } from "./times.js";
import { tracerFile } from "./tracer-file.js";
import { balanceUnit, perUnit, pureNumber } from "./units.js";

/** `simulate --pulse` and `--step`: a unit of tracer. */
export async function simulateUnit(network: Network, options: SimulateOptions, { io }: Context): Promise<Outcome> {
  const form = options.pulse === undefined ? "step" : "pulse";
  const into = options.pulse ?? options.step ?? "";
  if (options.follows !== undefined && !followedIn(network).includes(options.follows)) {
    const known = followedIn(network);
    throw new UsageError(
      `--follows: no \`sends\` of the network names '${options.follows}'${known.length > 0 ? `; there are ${known.join(", ")}` : ""}`,
    );
  }
  const plant = plantFollowing(plantAt(network, settingsFrom(network, options.set)), options.follows);
  requirePlace(into, plant.entry, `--${form}`);
  for (const name of options.at ?? []) requirePlace(name, plant.exit, "--at");
  const closed = isClosed(plant);
  if (closed && form === "step") throw new UsageError("nothing enters a closed vessel: use --pulse with a place in it");
  const clock = clockFrom(options, network.units.time, () => {
    if (closed) throw new UsageError("a closed vessel's curve has no end: say how long with --until or --times");
    return settlingTime(plant, into);
  });
  const everywhere = closed ? network.compartments.map((c) => c.name).filter((name) => plant.exit.has(name)) : [];
  const at = options.at ?? everywhere;
  const engine = engineNamed(options.engine, plant, clock.si[clock.si.length - 1]);
  const progress = progressOn(io);
  const run = (by: typeof engine) => {
    const watch = (done: number, of: number): boolean => {
      progress.say(`simulate: ${by.name}, ${Math.min(100, Math.round((100 * done) / of))} %`);
      return io.cancelled();
    };
    return tracerResponse(plant, { at: into, form }, clock.si, { engine: by, at, watch });
  };
  const result = run(engine);
  const other = options.verify ? run(engineBeside(engine, plant)) : undefined;
  progress.done();
  const difference = other && largestDifference(...curvesOf(result, other));
  const valueUnit = form === "pulse" && !closed ? perUnit(clock.unit) : pureNumber;
  const areaUnit = closed ? clock.unit : pureNumber;
  if (options.output !== undefined) {
    const curves = result.readings.map((r) => ({
      at: r.at,
      time: clock.shown,
      value: r.value.map((v) => inUnit(v, valueUnit)),
      cumulative: r.cumulative.map((v) => inUnit(v, areaUnit)),
      spikes: r.spikes.map((s) => ({ time: inUnit(s.time, clock.unit), area: inUnit(s.area, areaUnit) })),
    }));
    io.write(
      options.output,
      await tracerFile(options.output, {
        title: `${network.title}: a unit ${form} into ${into}`,
        y: wordsOfValue(form, closed, clock.unit.name),
        units: { time: clock.unit.name, value: valueUnit.name || "1", spike: areaUnit.name || "1" },
        curves,
        ...(closed ? { spikeWords: (area) => `${formatNumber(area, 3)}\u2009${areaUnit.name}` } : {}),
      }),
    );
  }
  if (options.ages !== undefined) io.write(options.ages, agesCsv(plant, clock.unit));
  const notes = [
    ...(result.stopped ? [`not converged: ${result.stopped}; what was found before is printed`] : []),
    ...(result.truncated && !result.stopped
      ? ["tracer passes through tubes were cut off where they add nothing that counts"]
      : []),
  ];
  const last = clock.shown[clock.shown.length - 1];
  return {
    status: !(result.stopped || other?.stopped) ? 0 : io.cancelled() ? 130 : 3,
    text: blocks(
      `${network.title}: a unit ${form} ${options.follows === undefined ? "" : `of ${options.follows} `}into ${into}, ${clock.shown.length} times to ${formatNumber(last)} ${clock.unit.name} (${result.engine})`,
      closed ? noMean : momentsTable(result.readings, clock.unit),
      curvesOn(io, () =>
        result.readings.map((r) => ({
          label: r.at,
          x: clock.shown,
          xUnit: clock.unit.name,
          y: r.value.map((v) => inUnit(v, valueUnit)),
          yUnit: valueUnit.name,
        })),
      ),
      spikesText(result.readings, clock.unit, areaUnit),
      balanceLine(result.balance, balanceUnit(form, clock.unit)),
      peaks(result.readings, clock.shown, valueUnit.factor, valueUnit.name, clock.unit.name),
      difference === undefined || !other
        ? ""
        : `  engines: ${result.engine} and ${other.engine} differ by at most ${formatNumber(difference, 2)} of the peak`,
      options.output === undefined ? "" : `  curves: ${options.output}`,
      options.ages === undefined ? "" : `  mean ages: ${options.ages}`,
    ),
    json: {
      ok: !result.stopped,
      ...tracerJson(result, clock, valueUnit, areaUnit, balanceUnit(form, clock.unit)),
      ...(difference === undefined || !other
        ? {}
        : { verify: { engines: [result.engine, other.engine], largestDifference: pure(difference).value } }),
      ...(result.stopped ? { stopped: result.stopped } : {}),
      ...(options.output === undefined ? {} : { written: options.output }),
      ...(options.ages === undefined ? {} : { ages: options.ages }),
    },
    notes,
  };
}

/** What the curves count, as an axis says it. */
function wordsOfValue(form: "pulse" | "step", closed: boolean, time: string): string {
  if (closed) return "concentration over that when all is mixed (c·V / amount)";
  return form === "pulse"
    ? `E, exit age (c·Q / amount), 1/${time}`
    : "F, share of what leaves that came in since (c / c in)";
}

/** Why a closed vessel has no table of moments. */
const noMean =
  "  closed: nothing leaves, so there is no mean time; values are concentration times all that is held over the amount, 1 where all is mixed";

type Result = ReturnType<typeof tracerResponse>;

const curvesOf = (a: Result, b: Result): [Float64Array[], Float64Array[]] => [
  a.readings.map((r) => r.value),
  b.readings.map((r) => r.value),
];

/** The largest value of each curve and when. */
function peaks(
  readings: Result["readings"],
  times: readonly number[],
  factor: number,
  unit: string,
  timeUnit: string,
): string {
  return readings
    .flatMap((r) => {
      const i = r.value.reduce((best, v, k) => (v > r.value[best] ? k : best), 0);
      const value = formatQuantity(r.value[i], { ...pureNumber, name: unit, factor });
      return r.value[i] > 0 ? [`  largest at ${r.at}: ${value} at ${formatNumber(times[i])} ${timeUnit}`] : [];
    })
    .join("\n");
}
