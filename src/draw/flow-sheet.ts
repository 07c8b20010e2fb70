import { kindValues } from "../compile/evaluate.js";
import type { Plant } from "../compile/plant.js";
import { partingsOf } from "../compile/sends.js";
import type { Compartment } from "../model/network.js";
import { dimensions } from "../units/dimension.js";
import { pastPlaces, type ShownStream } from "./past-places.js";
import { skipsBodies } from "./routes.js";
import { amount, typeset } from "./scale.js";
import type { BodyRole, FlowSheet, SheetBody, SheetGroup, SheetStream, SheetUnit } from "./sheet.js";

/** What a drawing of a plant may show besides its bodies and streams; names as in the file (`chain.2` marks `chain`). */
export interface SheetOptions {
  readonly injections?: readonly string[];
  readonly probes?: readonly string[];
  /** A few words behind a body's volume, by name, or a stream's flow (`feed>product`): what a fit leaves possible. */
  readonly notes?: ReadonlyMap<string, string>;
  /** Bodies and streams (`feed>product`) that the reader should look at. */
  readonly accents?: ReadonlySet<string>;
}

/** The flow sheet of a balanced plant: its file's names, its solved flows, its file's units. */
export function flowSheet(plant: Plant, wanted: SheetOptions = {}): FlowSheet {
  const { network } = plant;
  const options = atPorts(plant, wanted);
  const marked = new Set([...(options.injections ?? []), ...(options.probes ?? []), ...(options.notes?.keys() ?? [])]);
  const { streams, passed } = pastPlaces(plant, marked);
  const units = { volume: network.units.unitFor(dimensions.volume), flow: network.units.unitFor(dimensions.flow) };
  const sent = taken(plant);
  const named = (name: string, role: BodyRole): SheetBody => withOptions({ name, volume: 0, role }, options);
  const bodies = [
    ...plant.feeds.map((f) => named(f.name, "feed")),
    ...network.compartments.filter((c) => !passed.has(c.name)).map((c) => withOptions(bodyOf(c, plant), options)),
    ...plant.outlets.map((o) => withTaken(named(o.name, "outlet"), streams, sent)),
  ];
  return {
    title: network.title,
    says: vesselLine(plant, units),
    bodies,
    streams: streamsOf(streams, bodies, units.flow, options, sent),
    ...(network.groups.length > 0 ? { groups: groupsOf(plant, passed) } : {}),
    units,
  };
}

/** Parts as far as their bodies are drawn; what lies still is drawn apart. */
function groupsOf({ network: { groups, compartments } }: Plant, passed: ReadonlySet<string>): readonly SheetGroup[] {
  const drawn = new Set(compartments.filter((c) => c.kind.flows && !passed.has(c.name)).map((c) => c.name));
  return groups.map(({ name, members }) => ({ name, members: members.filter((m) => drawn.has(m)) }));
}

/** What is marked at a part is marked at its port. */
function atPorts({ network: { groups } }: Plant, options: SheetOptions): SheetOptions {
  const port = (side: "inlets" | "outlets") => (name: string) => groups.find((g) => g.name === name)?.[side][0] ?? name;
  const { injections, probes } = options;
  return {
    ...options,
    ...(injections ? { injections: injections.map(port("inlets")) } : {}),
    ...(probes ? { probes: probes.map(port("outlets")) } : {}),
  };
}

function bodyOf(c: Compartment, { env }: Plant): SheetBody {
  const values = kindValues(c, env);
  const volume = c.kind.volume(values);
  const role = !c.kind.flows ? "dead" : c.kind.keys.volume === undefined && !c.kind.zoned ? "junction" : "body";
  return { name: c.name, volume, role, aspect: c.kind.aspect(values), picture: (box) => c.kind.picture(box, values) };
}

function withOptions(body: SheetBody, { injections, probes, notes, accents }: SheetOptions): SheetBody {
  const here = (names: readonly string[] | undefined): boolean =>
    names?.some((n) => n === body.name || n.startsWith(`${body.name}.`)) ?? false;
  const marks = [...(here(injections) ? (["injection"] as const) : []), ...(here(probes) ? (["probe"] as const) : [])];
  const note = notes?.get(body.name);
  return {
    ...body,
    ...(marks.length > 0 ? { marks } : {}),
    ...(note === undefined ? {} : { note, fitted: true }),
    ...(accents?.has(body.name) ? { accent: true } : {}),
  };
}

function streamsOf(
  streams: readonly ShownStream[],
  bodies: readonly SheetBody[],
  unit: SheetUnit,
  { accents, notes }: SheetOptions,
  sent: ReadonlyMap<string, string>,
): readonly SheetStream[] {
  const role = new Map(bodies.map((b) => [b.name, b.role]));
  const onward = streams.filter((s) => s.role === "forward");
  return streams.map((s): SheetStream => {
    const bypass = s.role === "forward" && skipsBodies(s, onward, (name) => role.get(name) === "body");
    // the only stream of a terminal carries what the terminal's own words say
    const alone =
      (role.get(s.from) === "feed" && streams.filter((o) => o.from === s.from).length === 1) ||
      (role.get(s.to) === "outlet" && streams.filter((o) => o.to === s.to).length === 1 && plain(s));
    const partly = soleInto(role.get(s.to) === "outlet" ? s.to : undefined, streams) ? undefined : sent.get(way(s));
    const legs = [s.from, ...(s.past ?? []), s.to];
    const ways = legs.slice(1).map((to, k) => `${legs[k]}>${to}`);
    const note = ways.map((w) => notes?.get(w)).find((words) => words !== undefined);
    const words = [alone ? toMember(s).trim() : label(s, unit, note) + toMember(s), partly ?? ""];
    return {
      from: s.from,
      to: s.to,
      flow: s.flow,
      role: bypass ? "bypass" : s.role,
      label: words.filter((w) => w !== "").join("; "),
      ...(note === undefined ? {} : { fitted: true }),
      ...(ways.some((w) => accents?.has(w)) ? { accent: true } : {}),
    };
  });
}

const way = (s: ShownStream): string => `${s.from}>${s.enters}`;

/** The only stream that enters a terminal. */
function soleInto(terminal: string | undefined, streams: readonly ShownStream[]): ShownStream | undefined {
  const into = streams.filter((s) => s.to === terminal);
  return into.length === 1 ? into[0] : undefined;
}

/** An outlet says itself what its only stream takes of a substance. */
function withTaken(body: SheetBody, streams: readonly ShownStream[], sent: ReadonlyMap<string, string>): SheetBody {
  const only = soleInto(body.name, streams);
  const words = only && sent.get(way(only));
  if (words === undefined) return body;
  return { ...body, note: body.note === undefined ? words : `${words}, ${body.note}` };
}

/** What streams take of a substance that parts otherwise than the liquid does there: "solids 4 %". By `from>the body or member it enters`. */
function taken(plant: Plant): ReadonlyMap<string, string> {
  const words = new Map<string, string>();
  for (const { from, to, of, share } of partingsOf(plant)) {
    const before = words.get(`${from}>${to}`);
    const own = `${of} ${amount(share, { name: "%", factor: 0.01 })}`;
    words.set(`${from}>${to}`, before === undefined ? own : `${before}, ${own}`);
  }
  return words;
}

/** "1 L/min (bypass 10 %, 9 to 11)": the flow, what the file writes for it and the share that this makes, and a note. */
function label(s: ShownStream, unit: SheetUnit, note: string | undefined): string {
  const flow = amount(s.flow, unit);
  const inside = [writtenAs(s, flow), ...(note === undefined ? [] : [note])].filter((words) => words !== "");
  const through = s.through ? ` by ${s.through.join(", ")}` : "";
  return (inside.length === 0 ? flow : `${flow} (${inside.join(", ")})`) + through;
}

/** What the file writes, in its spelling: "30 %", "renewal", "bypass 10 %". What it computes from names is told by its value alone. */
function writtenAs(s: ShownStream, flow: string): string {
  const written = typeset(s.written.trim());
  if (plain(s) || written === flow) return "";
  const isName = /^[A-Za-z][\w.-]*$/.test(written) && written.length <= 24;
  const isNumber = /^[\d.,]+\s?\S*$/.test(written);
  if (isNumber || (isName && s.share === undefined)) return written;
  if (s.share === undefined) return "";
  const share = amount(s.share, { name: "%", factor: 0.01 });
  return isName ? `${written} ${share}` : share;
}

/** Which of a row of bodies it goes to, or which inlet it takes, where that is not the first or only one. */
const toMember = ({ to, enters }: ShownStream): string => (enters === to ? "" : ` to ${enters}`);

const plain = (s: ShownStream): boolean => s.written === "all" || s.written === "rest";

/** "vessel 1000 L, of which 120 L out of reach; feed 10 L/min; mean time 100 min" */
function vesselLine(plant: Plant, units: { readonly volume: SheetUnit; readonly flow: SheetUnit }): string {
  const { total, active, dead } = plant.volume;
  const feed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const volume = `vessel ${amount(total, units.volume)}`;
  const lost = dead > 0 ? `, of which ${amount(dead, units.volume)} out of reach` : "";
  const time = plant.network.units.time;
  const through =
    feed > 0 ? `; feed ${amount(feed, units.flow)}; mean time ${amount(active / feed, time)}` : "; closed";
  return volume + lost + through;
}
