import { checkTrial } from "../check/trial.js";
import type { Plant } from "../compile/plant.js";
import { plantFollowing } from "../compile/sends.js";
import { productUnit } from "../data/clean.js";
import { settingsOfDay } from "../fit/settings.js";
import { isClosed, type Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { parseTrial } from "../parse/trial.js";
import { collector } from "../problems/report.js";
import { plannedIn } from "../resolve/planned.js";
import { moments } from "../simulate/moments.js";
import { settlingTime } from "../simulate/tracer.js";
import { followTrial } from "../simulate/trial.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import { inUnit, type Unit } from "../units/unit.js";
import type { Context } from "./context.js";
import { engineBeside, engineNamed, largestDifference } from "./engines.js";
import { pure, quantity, series } from "./json/quantity.js";
import { balanceJson, momentsJson } from "./json/tracer.js";
import { type Outcome, UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";
import { requireTracer } from "./require-tracer.js";
import { settingsFrom } from "./settings.js";
import type { SimulateOptions } from "./simulate-options.js";
import { curvesOn } from "./text/plot.js";
import { blocks, table } from "./text/table.js";
import { balanceLine, momentsTable } from "./text/tracer.js";
import { type Clock, clockFrom } from "./times.js";
import { tracerFile } from "./tracer-file.js";
import { trialBalance } from "./trial-balance.js";
import { type TrialSpike, trialSpikes } from "./trial-spikes.js";

/** `simulate --trial`: what every probe of a trial would read. Times count from the first injection. */
export async function simulateTrial(
  network: Network,
  options: SimulateOptions,
  { inputs, io }: Context,
): Promise<Outcome> {
  if (options.follows) throw new UsageError("--follows is for --pulse and --step; a trial says itself what it follows");
  if (options.at) throw new UsageError("--at is for --pulse and --step; a trial says itself where it reads");
  const trial = plannedIn(inputs.document(options.trial ?? "", parseTrial), network.basis);
  requireTracer(trial, "`simulate --trial`");
  const { report, problems } = collector();
  checkTrial(network, trial, report);
  inputs.accept(problems);
  const liquid = plantAt(network, settingsOfDay(network, trial, settingsFrom(network, options.set)));
  const plant = plantFollowing(liquid, trial.tracer?.follows?.of);
  const starts = trial.injections.map((i) => i.start);
  const origin = Math.min(...starts, ...(trial.contents ? [trial.contents.begins] : []));
  const clock = clockFrom(options, network.units.time, () => lastTime(plant, trial, origin));
  const wanted = trial.readings.map(() => ({ time: clock.si.map((t) => t + origin) }));
  const varying = (trial.flowLogs?.size ?? 0) > 0 && options.engine === "auto";
  const engine = engineNamed(varying ? "ode" : options.engine, plant, clock.si[clock.si.length - 1]);
  const { curves, stopped } = followTrial(plant, trial, wanted, engine);
  const beside = engineBeside(engine, plant);
  const other = options.verify ? followTrial(plant, trial, wanted, beside) : undefined;
  const difference = other && largestDifference(curves, other.curves);
  const until = origin + clock.si[clock.si.length - 1];
  const balance = trialBalance(plant, trial, until, engine);
  const spikes = trial.readings.map((r) => trialSpikes(plant, trial, r, until));
  if (options.output !== undefined) {
    const unit = trial.readings[0]?.unit.name || "1";
    if (trial.readings.some((r) => (r.unit.name || "1") !== unit)) {
      throw new UsageError("-o needs all readings of the trial in one unit; use --json");
    }
    const rows = trial.readings.map((r, i) => {
      const value = curves[i].map((v) => inUnit(v, r.unit));
      const area = perTime(r.unit, clock.unit);
      const marks = spikes[i].map((s) => ({
        time: inUnit(s.time - origin, clock.unit),
        area: inUnit(s.area, area),
      }));
      return { at: r.at, time: clock.shown, value, spikes: marks };
    });
    const spike = `${unit} ${clock.unit.name}`;
    io.write(
      options.output,
      await tracerFile(options.output, {
        title: `${network.title}: ${trial.title}`,
        y: `tracer, ${unit}`,
        units: { time: clock.unit.name, value: unit, spike },
        curves: rows,
        spikeWords: (area) => `${formatNumber(area, 3)}\u2009${spike}`,
      }),
    );
  }
  const why = stopped ?? other?.stopped;
  const failed = why !== undefined || curves.some((c) => c.some(Number.isNaN));
  return {
    status: failed ? 3 : 0,
    text: blocks(
      `${network.title}: ${trial.title}, ${clock.shown.length} times to ${formatNumber(clock.shown[clock.shown.length - 1])} ${clock.unit.name} after the ${starts.includes(origin) ? "injection" : "start"} (${engine.name})`,
      readingsTable(trial, curves, clock),
      curvesOn(io, () =>
        trial.readings.map((r, i) => ({
          label: r.at,
          x: clock.shown,
          xUnit: clock.unit.name,
          y: curves[i].map((v) => inUnit(v, r.unit)),
          yUnit: r.unit.name,
        })),
      ),
      spikesText(trial, spikes, origin, clock),
      residenceText(plant, trial, clock),
      balance ? balanceLine(balance.balance, balance.unit) : "",
      difference === undefined ? "" : `  engines: they differ by at most ${formatNumber(difference, 2)} of the peak`,
      options.output === undefined ? "" : `  curves: ${options.output}`,
    ),
    json: {
      ok: !failed,
      engine: engine.name,
      trial: trial.title,
      readings: trial.readings.map((r, i) => ({
        at: r.at,
        time: { unit: clock.unit.name, values: clock.shown },
        value: series(curves[i], r.unit),
        spikes: spikes[i].map((s) => ({
          time: quantity(s.time - origin, clock.unit),
          area: quantity(s.area, perTime(r.unit, clock.unit)),
        })),
      })),
      moments: placesOf(plant, trial).map((p) => momentsJson(p, clock.unit)),
      balance: balance ? balanceJson(balance.balance, balance.unit) : null,
      ...(difference === undefined
        ? {}
        : { verify: { engines: [engine.name, beside.name], largestDifference: pure(difference).value } }),
      ...(why === undefined ? {} : { stopped: why }),
      ...(options.output === undefined ? {} : { written: options.output }),
    },
    notes: failed
      ? [`not converged: ${why ?? "some points have no value"}; points without a value are left empty`]
      : [],
  };
}

/** The end of the data where there are any, else when the curve is over. s after the first injection. */
function lastTime(plant: Plant, trial: Trial, origin: number): number {
  const ends = trial.readings.map((r) => r.series?.time.reduce((m, t) => Math.max(m, t), 0) ?? 0);
  const end = Math.max(0, ...ends) - origin;
  if (end > 0) return end;
  if (isClosed(plant)) throw new UsageError("a closed vessel's curve has no end: say how long with --until or --times");
  const entries = trial.injections.map((i) => ({ after: i.start - origin + i.lasting, into: i.at }));
  const begun = trial.contents
    ? plant.feeds.map((f) => ({ after: trial.contents!.begins - origin, into: f.name }))
    : [];
  return Math.max(...[...entries, ...begun].map(({ after, into }) => after + settlingTime(plant, into)));
}

/** Residence time at every reading; in a closed vessel there is none, and without an injection none was asked for. */
function residenceText(plant: Plant, trial: Trial, clock: Clock): string {
  if (isClosed(plant)) return "  closed: nothing leaves, so there is no mean time";
  const from = trial.injections[0]?.at;
  return from === undefined ? "" : `  residence time from ${from}\n${momentsTable(placesOf(plant, trial), clock.unit)}`;
}

/** Residence time from the first injection to every place that the trial reads. */
function placesOf(plant: Plant, trial: Trial) {
  const from = trial.injections[0]?.at;
  if (from === undefined || isClosed(plant)) return [];
  const all = moments(plant, plant.entry.get(from) as number);
  return [...new Set(trial.readings.flatMap((r) => r.places.map((p) => p.name)))].map((at) => {
    const node = plant.exit.get(at) as number;
    const { inflow } = plant.nodes[node];
    const flow = plant.feeds.find((f) => f.name === from)?.flow ?? plant.feeds.reduce((s, f) => s + f.flow, 0);
    return { at, moments: all[node], area: inflow > 0 ? (all[node].share * flow) / inflow : 0 };
  });
}

function readingsTable(trial: Trial, curves: readonly Float64Array[], clock: Clock): string {
  return table(
    [{ title: "reading" }, { title: "largest", align: "right" }, { title: `at, ${clock.unit.name}`, align: "right" }],
    trial.readings.map((r, i) => {
      const top = curves[i].reduce((best, v, k) => (v > curves[i][best] ? k : best), 0);
      return [r.at, formatQuantity(curves[i][top], r.unit), formatNumber(clock.shown[top])];
    }),
  );
}

/** The unit of a spike's area: concentration times time. */
const perTime = (value: Unit, time: Unit): Unit => productUnit(`${value.name || "1"} ${time.name}`, value, time);

/** Tracer that no curve shows, the first few spikes. */
function spikesText(trial: Trial, spikes: readonly TrialSpike[][], origin: number, clock: Clock): string {
  const lines = trial.readings.flatMap((r, i) =>
    spikes[i].slice(0, 4).map((s) => {
      const area = formatQuantity(s.area, perTime(r.unit, clock.unit));
      return `  undispersed at ${r.at}: ${area} all at once at ${formatNumber(inUnit(s.time - origin, clock.unit))} ${clock.unit.name}`;
    }),
  );
  return lines.join("\n");
}
