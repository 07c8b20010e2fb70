import type { Duty } from "../../model/duty.js";
import type { Feed } from "../../model/network.js";
import type { Asked, Study } from "../../model/study.js";
import type { AimResult } from "../../study/aim.js";
import { formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";

/** A flow within 1 % of a tested one counts as tested: meters read no better. */
const asGood = 0.01;

/** Lowest and highest flow of a feed in the trials, m3/s; undefined where nothing was tested. */
interface Tested {
  readonly feed: Feed;
  readonly trials: readonly { readonly title: string; readonly flow: number }[];
  readonly low: number;
  readonly high: number;
  readonly usual: number;
}

function testedOf({ rivals, trials }: Study): Tested[] {
  const network = rivals[0]?.network;
  if (!network) return [];
  return network.feeds.map((feed): Tested => {
    const usual = feed.flow.of(new Float64Array(network.names.length));
    const own = trials.map((t) => ({ title: t.title, flow: t.flows.get(feed.name)?.of([]) ?? usual }));
    const flows = own.map((t) => t.flow);
    return { feed, trials: own, low: Math.min(...flows), high: Math.max(...flows), usual };
  });
}

const say = ({ feed }: Tested, flow: number): string => formatQuantity(flow, feed.flow.unit as Unit, 4);

/** "from 20 L/min to 40 L/min", or the one flow that was tested. */
const range = (t: Tested): string =>
  t.low === t.high ? `at ${say(t, t.low)} only` : `from ${say(t, t.low)} to ${say(t, t.high)}`;

const isBeyond = (t: Tested, flow: number): boolean =>
  t.trials.length > 0 && (flow > t.high * (1 + asGood) || flow < t.low * (1 - asGood));

/** Flows that were tested, and what goes beyond them: duties, sweeps and aims. */
export function testedFlows(study: Study): { lines: string[]; extrapolated: string[] } {
  const feeds = testedOf(study);
  const lines = feeds.flatMap((t) => t.trials.map(({ title, flow }) => `${title}: ${t.feed.name} at ${say(t, flow)}`));
  const duties = feeds.flatMap((t) =>
    study.duties.flatMap((d) => {
      const flow = d.flows.get(t.feed.name)?.value.of([]) ?? t.usual;
      if (!isBeyond(t, flow)) return [];
      const ends = flow > t.high ? `up to ${say(t, t.high)}` : `down to ${say(t, t.low)}`;
      return [`${d.title}: ${t.feed.name} ${say(t, flow)}, tested ${ends}`];
    }),
  );
  const looks = [...study.sweeps.flatMap((s) => s.over), ...study.aims.map((a) => a.by)];
  const ranges = feeds.flatMap((t) => {
    const ends = looks.flatMap(({ name, between }) =>
      name === `${t.feed.name}.flow` && between ? between.map((q) => q.of([])) : [],
    );
    if (!ends.some((q) => isBeyond(t, q))) return [];
    const looked = `from ${say(t, Math.min(...ends))} to ${say(t, Math.max(...ends))}`;
    return [`${t.feed.name}.flow is looked at ${looked}, tested ${range(t)}`];
  });
  return { lines, extrapolated: [...duties, ...ranges] };
}

/** Does a duty run at a flow that no trial was made near? In words to stand behind a number, or nothing. */
export function beyondWords(study: Study, duty: Duty): string {
  const beyond = testedOf(study).some((t) => isBeyond(t, duty.flows.get(t.feed.name)?.value.of([]) ?? t.usual));
  return beyond ? " (beyond the flows that were tested)" : "";
}

/** What of a look over a feed's flow lies beyond the trials, in a sentence, or nothing: the flows (m3/s) are those that are told of. */
export function beyondRange(study: Study, name: string, flows: readonly number[]): string {
  const tested = testedOf(study).find((t) => `${t.feed.name}.flow` === name);
  if (!tested?.trials.length || !flows.some((q) => isBeyond(tested, q))) return "";
  return `Beyond the trials, which were made ${range(tested)}: extrapolated.`;
}

/** The same of an aim's answer: of the flows that it names. */
export function beyondAim(
  study: Study,
  { by, duty }: Asked & { readonly by: { readonly name: string } },
  found: AimResult,
): string {
  const told = [...found.met.flatMap(({ from, to }) => [from, to]), ...found.crossings.map((c) => c.at)];
  const flows = told.length > 0 ? told : [found.range.from, found.range.to];
  if (found.range.input.name === by.name) {
    const says = beyondRange(study, by.name, flows);
    if (says !== "") return says;
  }
  const fixed = testedOf(study).filter((t) => `${t.feed.name}.flow` !== by.name);
  const off = fixed.some((t) => isBeyond(t, duty.flows.get(t.feed.name)?.value.of([]) ?? t.usual));
  return off ? "At a flow beyond those that were tested: extrapolated." : "";
}
