import { kinds } from "../compartments/index.js";
import type { Compartment } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type MapNode, type Tree, textOf } from "../read/tree.js";
import type { KeyShape } from "../schema/shape.js";
import { dimensionsOf } from "./names.js";
import { resolveExchanges, resolveStreams } from "./streams.js";
import { resolveValue, type Scope } from "./value.js";
import { defaultTolerance, resolveZones, zoneStreams } from "./zones.js";

/** A body of a document, under the names that the document uses. */
export function resolveCompartment(
  name: string,
  at: Compartment["at"],
  node: MapNode,
  scope: Scope,
  env: ArrayLike<number>,
  files: Files,
  report: Report,
): Compartment | undefined {
  const kindName = textOf(node, "kind") ?? "";
  const kind = Object.hasOwn(kinds, kindName) ? kinds[kindName] : undefined;
  if (!kind) return undefined; // the shape check has said so
  const keys = resolveKeys(kind.keys, node, scope, report);
  const tolerance = keys.values.tolerance?.of(env) ?? defaultTolerance;
  const zones = kind.zoned && resolveZones(name, at, node, tolerance, files, report);
  const streams = kind.zoned ? [] : resolveStreams(child(node, "to"), scope, report);
  return {
    name,
    at,
    kind,
    ...keys,
    zones,
    streams: zones ? zoneStreams(name, child(node, "to"), zones, report) : streams,
    exchanges: resolveExchanges(child(node, "exchange"), scope, report),
    toAt: child(node, "to")?.at ?? at,
  };
}

type Keys = Pick<Compartment, "values" | "counts" | "words">;

/** The keys of a kind by their declaration; those inside a key are named by both. */
function resolveKeys(
  keys: Readonly<Record<string, KeyShape>>,
  node: Tree | undefined,
  scope: Scope,
  report: Report,
  within = "",
): Keys {
  const values: Record<string, Value> = {};
  const counts: Record<string, number> = {};
  const words: Record<string, string> = {};
  for (const [key, { shape }] of Object.entries(keys)) {
    const written = child(node, key);
    if (!written) continue;
    const name = within + key;
    if (shape.is === "quantity") {
      const value = resolveValue(written, dimensionsOf(shape.dimension), scope, report);
      if (value) values[name] = value;
    } else if (shape.is === "record") {
      const inside = resolveKeys(shape.keys, written, scope, report, `${name}.`);
      Object.assign(values, inside.values);
      Object.assign(counts, inside.counts);
      Object.assign(words, inside.words);
    } else if (shape.is === "whole" && written.type === "scalar") counts[name] = Number(written.text);
    else if (shape.is === "choice" && written.type === "scalar") words[name] = written.text;
  }
  return { values, counts, words };
}
