import type { Duty } from "../model/duty.js";
import { membersOf } from "../model/members.js";
import { followedIn, isClosed, type Network } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { checkHolds } from "./holds.js";
import { isCell, placeNames } from "./places.js";
import { sameKind } from "./same-kind.js";

/**
 * Does a duty fit a network: are its feeds, places and constants there, and does it say what every feed brings?
 * @param inTime whether it is to be followed in time: a closed vessel has no steady state to look for
 */
export function checkDuty(network: Network, duty: Duty, report: Report, inTime = false): void {
  if (network.basis === "mass") {
    report("not-yet", duty.at, { what: "a duty on a network with `basis: mass`" });
    return;
  }
  if (isClosed(network) && !inTime) {
    report("not-yet", duty.at, { what: `a duty in a closed vessel, which is a batch without a steady state,` });
    return;
  }
  if (isClosed(network) && !duty.contents) report("contents-missing", duty.at, {});
  const species = new Set([
    ...(duty.chemistry?.species.map((s) => s.name) ?? []),
    ...[...duty.feeds.values()].flatMap((f) => [...f.species.keys()]),
  ]);
  for (const of of followedIn(network).filter((name) => species.has(name))) {
    report("not-yet", duty.at, { what: `'${of}' in a duty, which the network \`sends\` otherwise than the liquid,` });
  }
  const { feeds, outlets, left } = placeNames(network);
  const look = (name: string, at: Span, wanted: string, among: readonly string[]): boolean => {
    if (among.includes(name) || (wanted.includes("compartment") && isCell(network, name))) return true;
    report("unknown-place", at, { name, nearest: nearest(name, among), wanted, known: among });
    return false;
  };
  for (const [name, { at }] of duty.flows) look(name, at, "feed", feeds);
  const known = [...duty.feeds].filter(([name, { at }]) => look(name, at, "feed", feeds));
  // A slip in the name of a feed is not that the feed is forgotten, too.
  if (known.length === duty.feeds.size && (duty.chemistry || duty.feeds.size > 0)) {
    for (const feed of feeds) if (!duty.feeds.has(feed)) report("feed-not-given", duty.at, { feed });
  }
  const bodies = network.compartments.map((c) => c.name);
  const places = [...bodies, ...network.groups.map((g) => g.name), ...network.compartments.flatMap(membersOf)];
  const held = [...(duty.local ?? [])].map(([name, { at }]) => ({ key: "local", name, at }));
  const jackets = [...(duty.heat?.jackets ?? [])].map(([name, { at }]) => ({ key: "heat", name, at }));
  for (const { feed, outlet, at } of duty.heat?.exchangers ?? []) {
    look(feed, at, "feed", feeds);
    look(outlet, at, "outlet", outlets);
  }
  for (const { key, name, at } of [...held, ...jackets]) {
    if (look(name, at, "compartment", places)) somethingFlows(network, key, name, at, report);
  }
  for (const [name, { at }] of duty.contents?.levels ?? []) checkHolds(network, name, at, look, report);
  checkSettings(network, duty, look, report);
  if (duty.regulated) look(duty.regulated.outlet, duty.regulated.outletAt, "outlet", outlets);
  for (const { at, place, what } of duty.report) {
    if (at !== undefined && what === "tracer-time") look(at, place, "outlet", outlets);
    else if (at !== undefined) look(at, place, "outlet, compartment or feed", [...outlets, ...left, ...feeds]);
  }
}

/** Constants and jackets need a liquid that flows past them. */
function somethingFlows(network: Network, key: string, name: string, at: Span, report: Report): void {
  const body = network.compartments.find((c) => c.name === name);
  if (!body || (body.kind.flows && (body.kind.keys.volume || body.zones))) return;
  const why = body.kind.flows ? "holds no liquid" : "no flow reaches";
  report("nothing-flows-there", at, { name, key, why });
}

function checkSettings(
  network: Network,
  duty: Duty,
  look: (name: string, at: Span, wanted: string, among: readonly string[]) => boolean,
  report: Report,
): void {
  const own = network.names.filter((n) => n.role !== "feed-flow" && n.role !== "inflow");
  const names = [...own.map((n) => n.name), ...(duty.chemistry?.constants.map((c) => c.name) ?? [])];
  for (const [name, { at, value }] of duty.settings) {
    if (!look(name, at, "constant", names)) continue;
    const wanted = own.find((n) => n.name === name)?.value.dimension;
    if (wanted) sameKind(wanted, value, report);
  }
}
