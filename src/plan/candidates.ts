import { compile } from "../compile/compile.js";
import type { Fit } from "../fit/result.js";
import type { Network } from "../model/network.js";
import type { Reading, Trial } from "../model/trial.js";
import type { Value } from "../model/value.js";
import { formatQuantity } from "../units/format.js";

/** A test that could be run besides those that were. */
export interface Candidate {
  readonly sort: "again" | "flow" | "setting" | "probe" | "longer";
  readonly says: string;
  readonly trial: Trial;
  /** s on the trial's clock, by reading. */
  readonly times: readonly Float64Array[];
  /** Index of the reading of the fit that scatters as its readings would. */
  readonly like: number;
}

/** What is known of the vessel: its values and the readings that there are. */
type Fitted = Pick<Fit, "values" | "readings">;

/** Probes are thought of in so many compartments, the largest ones. */
const mostProbes = 12;

/**
 * Further tests of one vessel, all after the last trial that has readings: as it was, longer, at half and twice the flow, at half
 * and twice what a day set otherwise or what turns (1/min), and with one more probe in each compartment that the flow reaches.
 */
export function candidatesFor(network: Network, trials: readonly Trial[], fit: Fitted): Candidate[] {
  const last = trials.findLastIndex((t) => !t.reacting && t.readings.some((r) => r.series && r.series.time.length > 0));
  if (last < 0) return [];
  const model = trials[last];
  const readings = model.readings.filter((r) => r.series && r.series.time.length > 0);
  const like = Math.max(
    0,
    fit.readings.findIndex((r) => r.trial === model.title),
  );
  const trial: Trial = { ...model, readings, title: `${model.title}, again` };
  const times = readings.map((r) => evenly(r.series?.time ?? new Float64Array(0)));
  const base = { trial, times, like };
  const origin = model.injections.length > 0 ? Math.min(...model.injections.map((i) => i.start)) : 0;
  const scaledTimes = (by: number): Float64Array[] => times.map((at) => at.map((t) => origin + (t - origin) * by));
  const again: Candidate = { ...base, sort: "again", says: "the same test once more" };
  const longer: Candidate = {
    ...base,
    sort: "longer",
    says: "the same test, read twice as long",
    times: times.map((at) => {
      const end = at[at.length - 1];
      const tail = Float64Array.from(
        { length: Math.ceil(at.length / 2) },
        (_, i, n = Math.ceil(at.length / 2)) => end + ((end - origin) * (i + 1)) / n,
      );
      return Float64Array.from([...at, ...tail]);
    }),
  };
  const flows = trial.flowLogs
    ? []
    : ([0.5, 2] as const)
        .map((by) => ({ by, flows: scaledFlows(network, trial, by) }))
        .filter(({ flows: wanted }) => !trials.some((t) => runsAt(network, t, wanted)))
        .map(
          ({ by, flows: wanted }): Candidate => ({
            ...base,
            sort: "flow",
            says: `a test at ${by < 1 ? "half" : "twice"} the flow${flowWords(network, wanted)}`,
            trial: { ...trial, flows: wanted },
            times: scaledTimes(1 / by),
          }),
        );
  return [again, longer, ...flows, ...settings(network, trials, base), ...probes(network, fit, base)];
}

/** At most 200 of the times, evenly picked. */
const evenly = (time: Float64Array): Float64Array => {
  const sorted = Float64Array.from(time).sort();
  const stride = Math.max(1, Math.ceil(sorted.length / 200));
  return sorted.filter((_, i) => i % stride === 0);
};

function scaledFlows(network: Network, trial: Trial, by: number): Map<string, Value> {
  return new Map(
    network.feeds.map(({ name, flow }) => {
      const of = trial.flows.get(name) ?? flow;
      return [name, { ...of, of: (env) => by * of.of(env), sd: of.sd && ((env) => by * (of.sd?.(env) ?? 0)) }] as const;
    }),
  );
}

/** A flow this near to one that was tested says nothing new of how the vessel follows its flow. */
const sameFlow = 0.05;

/** Was a trial run at these flows? */
const runsAt = (network: Network, trial: Trial, wanted: ReadonlyMap<string, Value>): boolean =>
  !trial.reacting &&
  network.feeds.every(({ name, flow }) => {
    const [had, asked] = [(trial.flows.get(name) ?? flow).of([]), wanted.get(name)?.of([]) ?? 0];
    return Math.abs(had - asked) <= sameFlow * asked;
  });

/** " (feed 10 L/min)", where there are not too many to say. */
function flowWords({ units }: Network, flows: ReadonlyMap<string, Value>): string {
  const told = [...flows].map(([name, v]) => ({ name, flow: v.of([]), unit: v.unit ?? units.unitFor(v.dimension) }));
  if (told.length > 2 || told.some(({ flow }) => !Number.isFinite(flow))) return "";
  return ` (${told.map(({ name, flow, unit }) => `${name} ${formatQuantity(flow, unit, 3)}`).join(", ")})`;
}

/** Constants that some day set otherwise, or that count turns per time, at half and twice their value. */
function settings(network: Network, trials: readonly Trial[], base: Omit<Candidate, "sort" | "says">): Candidate[] {
  const set = new Set(trials.flatMap((t) => [...t.with.keys()]));
  const turns = ({ dimension }: Value): boolean => dimension.every((d, i) => d === (i === 2 ? -1 : 0));
  return network.names
    .filter((n) => n.role === "constant" && (set.has(n.name) || turns(n.value)) && n.value.uses.length === 0)
    .flatMap(({ name, value }) => {
      const of = base.trial.with.get(name) ?? value;
      return [0.5, 2].map((by): Candidate => {
        const moved: Value = { ...of, of: (env) => by * of.of(env) };
        const to = formatQuantity(by * of.of([]), of.unit ?? network.units.unitFor(of.dimension), 3);
        return {
          ...base,
          sort: "setting",
          says: `a test with ${name} at ${to}`,
          trial: { ...base.trial, with: new Map(base.trial.with).set(name, moved) },
        };
      });
    });
}

/** The same test with one more probe, in a compartment that is not read yet. */
function probes(network: Network, fit: Fitted, base: Omit<Candidate, "sort" | "says">): Candidate[] {
  const read = new Set(base.trial.readings.flatMap((r) => r.places.map((p) => p.name)));
  const [first] = base.trial.readings;
  const { plant } = compile(network, fit.values);
  if (!plant) return [];
  return network.compartments
    .filter((c) => plant.exit.has(c.name) && (c.values.volume?.of(plant.env) ?? 0) > 0 && !read.has(c.name))
    .slice(0, mostProbes)
    .map(({ name }): Candidate => {
      const probe: Reading = {
        ...first,
        at: name,
        places: [{ name, where: first.where, share: 1 }],
        baseline: "none",
        scale: "known",
        limits: { below: undefined, above: undefined },
      };
      return {
        ...base,
        sort: "probe",
        says: `the same test with a calibrated probe in '${name}' too`,
        trial: { ...base.trial, readings: [...base.trial.readings, probe] },
        times: [...base.times, base.times[0]],
      };
    });
}
