import { followedIn, isClosed, type Network } from "../model/network.js";
import type { Reacting, Trial } from "../model/trial.js";
import type { Report } from "../problems/report.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { inBasis } from "../units/basis.js";
import { dimensions } from "../units/dimension.js";
import { checkHolds } from "./holds.js";
import { isCell, placeNames } from "./places.js";
import { sameKind } from "./same-kind.js";

type Look = (name: string, at: Span, wanted: string, among: readonly string[]) => boolean;

/**
 * Does a trial of a reaction fit its vessel: are feeds, places and constants there, and is all known that the reaction needs?
 * @param given the network of the command or study; a flask of the trial's own comes first
 */
export function checkReacting(given: Network, trial: Trial, reacting: Reacting, report: Report): void {
  const network = reacting.vessel ?? given;
  const { feeds, outlets, left } = placeNames(network);
  const look: Look = (name, at, wanted, among) => {
    if (among.includes(name) || (wanted.includes("compartment") && isCell(network, name))) return true;
    report("unknown-place", at, { name, nearest: nearest(name, among), wanted, known: among });
    return false;
  };
  if (network.basis === "mass") report("not-yet", reacting.at, { what: "a chemistry on a network with `basis: mass`" });
  const species = new Set(reacting.chemistry.species.map((s) => s.name));
  for (const of of followedIn(network).filter((name) => species.has(name)))
    report("not-yet", reacting.at, {
      what: `'${of}' in a chemistry, which the network \`sends\` otherwise than the liquid,`,
    });
  for (const { name, where } of trial.readings.flatMap((r) => r.places))
    look(name, where, "outlet or compartment", [...outlets, ...left]);
  for (const [name, value] of trial.flows)
    if (look(name, value.at, "feed", feeds)) sameKind(inBasis(dimensions.flow, network.basis), value, report);
  checkConstants(network, trial, reacting, look, report);
  for (const { line, where } of trial.readings)
    if (line.lag) report("not-yet", where, { what: "the `lag` of a detector in a trial of a reaction" });
  if (isClosed(network)) checkFlask(network, trial, reacting, look, report);
  else checkFed(network, trial, reacting, feeds, look, report);
}

function checkConstants(network: Network, trial: Trial, { chemistry }: Reacting, look: Look, report: Report): void {
  const own = network.names.filter((n) => n.role === "constant");
  const all = [...own, ...chemistry.constants.filter((c) => !c.free)];
  for (const [name, { at }] of trial.late ?? [])
    report("not-yet", at, { what: `a value made of names for '${name}', in a trial of a reaction,` });
  for (const [name, value] of trial.with) {
    if (
      !look(
        name,
        value.at,
        "constant",
        all.map((c) => c.name),
      )
    )
      continue;
    const constant = all.find((c) => c.name === name);
    if (constant) sameKind(constant.value.dimension, value, report);
  }
}

/** A flask is followed in time from what it held. */
function checkFlask(network: Network, trial: Trial, reacting: Reacting, look: Look, report: Report): void {
  for (const [name, { at }] of reacting.feeds) report("flask-is-fed", at, { name });
  const steady = trial.readings.find((r) => r.of?.steady);
  if (steady) report("steady-in-flask", steady.where, {});
  if (reacting.contents.size === 0) report("flask-without-contents", reacting.at, {});
  for (const [name, { at }] of reacting.contents) checkHolds(network, name, at, look, report);
}

/** Of a vessel with feeds all that they bring must be known. */
function checkFed(
  network: Network,
  trial: Trial,
  reacting: Reacting,
  feeds: readonly string[],
  look: Look,
  report: Report,
): void {
  const known = [...reacting.feeds].filter(([name, { at }]) => look(name, at, "feed", feeds));
  // A slip in the name of a feed is not that the feed is forgotten, too.
  if (known.length === reacting.feeds.size)
    for (const feed of feeds) if (!reacting.feeds.has(feed)) report("feed-not-given", trial.at, { feed });
  for (const [name, { at }] of reacting.contents) checkHolds(network, name, at, look, report);
  if (trial.flowLogs) report("not-yet", trial.at, { what: "a logged flow in a trial of a reaction" });
}
