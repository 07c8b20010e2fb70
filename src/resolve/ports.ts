import { memberOf } from "../model/members.js";
import type { Compartment, Stream } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import type { Part } from "./part.js";
import { resolveStreams } from "./streams.js";
import { nowhere } from "./unknown.js";
import type { Scope } from "./value.js";
import { aimStreams as aimAtZones } from "./zones.js";

/** Where each outlet of a part leads, under the names of the document that it stands in. */
export type PartWays = ReadonlyMap<string, readonly Stream[]>;

/** Places of one document that a stream may end at. */
export interface Places {
  /** Is it for us to say where a stream ends nowhere? */
  readonly check: boolean;
  readonly feeds: ReadonlyMap<string, { readonly streams: readonly Stream[] }>;
  readonly bodies: readonly Compartment[];
  readonly parts: ReadonlyMap<string, Part>;
  /** Parts that cannot be used. */
  readonly lost: ReadonlySet<string>;
  readonly outlets: readonly string[];
}

/** The first of the repeats of a part, or the part: what its inlets belong to. */
export const firstOf = ({ name, repeat }: Part): string => (repeat > 1 ? `${name}.1` : name);

/** Streams with the ports that they enter by: `core` or `core.feed` becomes the inlet itself. */
export function aimStreams(from: string, streams: readonly Stream[], places: Places, report: Report): Stream[] {
  return aimAtZones(
    streams,
    places.bodies.filter((b) => b.zones),
  ).map((s) => {
    const [name, ...rest] = s.to.split(".");
    const part = places.parts.get(name);
    if (s.unknown) return s;
    if (part) {
      const to = inletOf(part, rest.join("."), s, report);
      return to === undefined ? { ...s, unknown: true } : { ...s, to };
    }
    const body = memberOf(places.bodies, s.to);
    // What enters the first member enters the body.
    if (body) return { ...s, to: body.name, ...(s.to.endsWith(".1") ? {} : { enters: rest.join(".") }) };
    if (places.lost.has(name)) return { ...s, to: name };
    return places.check && !mayEnter(from, s, places, report) ? { ...s, unknown: true } : s;
  });
}

/** Does a stream end at some place, once it is aimed? */
export const isPlace = (to: string, { feeds, bodies, parts, outlets }: Places): boolean =>
  feeds.has(to) ||
  outlets.includes(to) ||
  bodies.some((b) => b.name === to) ||
  [...parts.values()].some((p) => p.inlets.some((inlet) => to.startsWith(`${p.name}.`) && to.endsWith(`.${inlet}`)));

/** The inlet of a part; undefined, and reported, where it has none so. */
function inletOf(part: Part, port: string, { at }: Stream, report: Report): string | undefined {
  const { name, inlets: known } = part;
  if (port === "" && known.length === 1) return `${firstOf(part)}.${known[0]}`;
  if (port === "") report("port-open", at, { part: name, side: "inlet", known });
  else if (known.includes(port)) return `${firstOf(part)}.${port}`;
  else {
    const [number, inlet = known[0], ...more] = port.split(".");
    if (isRepeat(part, number) && known.includes(inlet) && more.length === 0) return `${name}.${number}.${inlet}`;
    report("unknown-port", at, { name: port, part: name, side: "inlet", nearest: nearest(port, known), known });
  }
  return undefined;
}

/** Is it the number of one of a part's repeats? */
const isRepeat = ({ repeat }: Part, number: string): boolean =>
  repeat > 1 && /^[1-9]\d*$/.test(number) && Number(number) <= repeat;

/** Reports where a stream goes to no place that may be entered; true where it does. */
function mayEnter(
  from: string,
  { to, at }: Stream,
  { feeds, bodies, parts, lost, outlets }: Places,
  report: Report,
): boolean {
  const body = bodies.find((b) => b.name === to);
  const feed = feeds.get(to);
  if (body || outlets.includes(to)) return true;
  if (feed) {
    const enters = feed.streams.length === 1 ? feed.streams[0].to : undefined;
    report("into-feed", at, { name: to, from, enters });
    return false;
  }
  const known = [...bodies.map((b) => b.name), ...parts.keys(), ...lost, ...outlets];
  report("unknown-place", at, { name: to, wanted: "compartment or outlet", nearest: nearest(to, known), known });
  return false;
}

/** Reads the `to:` of a part: one name for its one outlet, or a map from outlets to a name or a split. */
export function partWays({ name, at, node, outlets }: Part, scope: Scope, report: Report): PartWays {
  const to = child(node, "to");
  const ways = new Map<string, Stream[]>();
  if (to?.type === "scalar" && !to.empty) {
    if (outlets.length === 1) ways.set(outlets[0], [{ to: to.text, at: to.at, split: { is: "all" } }]);
    else report("port-open", to.at, { part: name, side: "outlet", known: outlets });
  }
  let clear = to?.type === "map";
  for (const { key, value } of entriesOf(to)) {
    if (!outlets.includes(key.text)) {
      clear = false;
      const near = nearest(key.text, outlets);
      report("unknown-port", key.at, { name: key.text, part: name, side: "outlet", nearest: near, known: outlets });
    } else if (value.type === "map") ways.set(key.text, resolveStreams(value, scope, report));
    else if (value.type === "scalar" && isName(value.text)) {
      ways.set(key.text, [{ to: value.text, at: value.at, split: { is: "all" } }]);
    } else {
      report("not-a-place", value.at, { outlet: key.text, text: value.type === "scalar" ? value.text : "a list" });
      ways.set(key.text, [nowhere(value.at)]);
    }
  }
  for (const o of outlets) {
    if (ways.has(o)) continue;
    if (clear) report("outlet-unmapped", at, { part: name, outlet: o });
    ways.set(o, [nowhere(to?.at ?? at)]);
  }
  return ways;
}

const isName = (text: string): boolean => text !== "rest" && /^[A-Za-z][A-Za-z0-9_-]*(\.[A-Za-z0-9_-]+)*$/.test(text);

/** Every inlet of a part has a stream. */
export function unfedInlets(part: Part, fed: ReadonlySet<string>, report: Report): void {
  for (const inlet of part.inlets) {
    if (!fed.has(`${firstOf(part)}.${inlet}`)) report("inlet-unfed", part.at, { part: part.name, inlet });
  }
}
