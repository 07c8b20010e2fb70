import type { Compartment, Feed, Named, Outlet, Stream } from "../model/network.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, entriesOf, itemsOf } from "../read/tree.js";
import { checkName } from "./check-name.js";
import { resolveCompartment } from "./compartment.js";
import { lostParts } from "./lost.js";
import type { Instance, Part } from "./part.js";
import { aimStreams, isPlace, type PartWays, partWays, unfedInlets } from "./ports.js";
import { resolveStreams } from "./streams.js";
import { unknownBody } from "./unknown.js";
import type { Scope } from "./value.js";

/** What one document declares, under its own names; streams to a part end at one of its inlets (`core.feed`). */
export interface LocalNetwork {
  readonly feeds: readonly LocalFeed[];
  /** In file order. */
  readonly bodies: readonly (Compartment | PlacedPart)[];
  readonly outlets: readonly Outlet[];
}

/** A feed; without a flow of its own where the document is a part. */
export interface LocalFeed extends Omit<Feed, "flow" | "flowSlot"> {
  readonly named: Named | undefined;
}

/** A part with where its outlets lead. */
export interface PlacedPart {
  readonly part: Part;
  readonly ways: PartWays;
}

/**
 * Binds the places and streams of one document.
 * @param flows the flows of its feeds; none where it is a part
 */
export function resolveLocal(
  instance: Instance,
  flows: readonly Named[],
  scope: Scope,
  env: ArrayLike<number>,
  files: Files,
  report: Report,
): LocalNetwork {
  const { tree, parts } = instance;
  const feeds = entriesOf(child(tree, "feeds")).map(({ key, value }): LocalFeed => {
    checkName(key, report);
    return {
      name: key.text,
      at: key.at,
      named: flows.find((n) => n.name === `${key.text}.flow`),
      streams: resolveStreams(child(value, "to"), scope, report),
      toAt: child(value, "to")?.at ?? key.at,
    };
  });
  const lost = lostParts(instance);
  const bodies = entriesOf(child(tree, "compartments")).flatMap(({ key, value }): (Compartment | PlacedPart)[] => {
    checkName(key, report);
    const part = parts.get(key.text);
    if (part) return [{ part, ways: partWays(part, scope, report) }];
    if (value.type !== "map") return [];
    // A part that could not be opened is told already.
    if (lost.has(key.text)) return [unknownBody(key.text, key.at, value)];
    return [resolveCompartment(key.text, key.at, value, scope, env, files, report)];
  });
  const outlets = itemsOf(child(tree, "outlets")).flatMap((item): Outlet[] => {
    if (item.type !== "scalar") return [];
    checkName(item, report);
    return [{ name: item.text, at: item.at }];
  });
  const places = {
    // In a part nobody else looks whether its streams end somewhere.
    check: instance.prefix !== "",
    feeds: new Map(feeds.map((f) => [f.name, f])),
    bodies: bodies.flatMap((b) => ("part" in b ? [] : [b])),
    parts,
    lost,
    outlets: outlets.map((o) => o.name),
  };
  const fed = new Set<string>();
  const aim = (from: string, streams: readonly Stream[]): Stream[] => {
    const aimed = aimStreams(from, streams, places, report);
    for (const s of aimed) fed.add(s.to);
    return aimed;
  };
  const local = {
    feeds: feeds.map((f) => ({ ...f, streams: aim(f.name, f.streams) })),
    bodies: bodies.map((b) => {
      if (!("part" in b)) return { ...b, streams: aim(b.name, b.streams) };
      const ways = new Map([...b.ways].map(([outlet, streams]) => [outlet, aim(b.part.name, streams)]));
      return { part: b.part, ways };
    }),
    outlets,
  };
  // A slip in the name of a part is not that nothing enters it, too; nor is a part that would have fed it.
  const slip = parts.size > 0 && [...fed].some((to) => !isPlace(to, places));
  if (!slip && lost.size === 0) for (const part of parts.values()) unfedInlets(part, fed, report);
  return local;
}
