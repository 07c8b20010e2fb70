import { kinds } from "../compartments/index.js";
import type { Compartment } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type MapNode, type Tree, textOf } from "../read/tree.js";
import type { KeyShape } from "../schema/shape.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { dimensionsOf } from "./names.js";
import { resolveSends } from "./sends.js";
import { resolveExchanges, resolveStreams } from "./streams.js";
import { unknownBody, unknownValue } from "./unknown.js";
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
): Compartment {
  const kindName = textOf(node, "kind") ?? "";
  // Of another kind the shape check tells; what is meant tells what else there is to look at.
  const meant = Object.hasOwn(kinds, kindName) ? kindName : nearest(kindName, Object.keys(kinds));
  const kind = meant === undefined || kinds[meant].placed ? undefined : kinds[meant];
  if (!kind) return unknownBody(name, at, node);
  const keys = resolveKeys(kind.keys, node, at, scope, report);
  const tolerance = keys.values.tolerance?.of(env) ?? defaultTolerance;
  const zones = kind.zoned && resolveZones(name, at, node, tolerance, scope.basis ?? "volume", files, report);
  if (kind.zoned && !zones) return unknownBody(name, at, node);
  const streams = kind.zoned ? [] : resolveStreams(child(node, "to"), scope, report);
  const sent = kind.sends ? resolveSends(name, child(node, "sends"), streams, scope, report) : { streams };
  return {
    name,
    at,
    kind,
    ...keys,
    zones: zones || undefined,
    ...sent,
    ...(zones ? { streams: zoneStreams(name, child(node, "to"), zones, report) } : {}),
    exchanges: resolveExchanges(child(node, "exchange"), scope, report),
    toAt: child(node, "to")?.at ?? at,
  };
}

type Keys = Pick<Compartment, "values" | "counts" | "words">;

/** The keys of a kind by their declaration; those inside a key are named by both. */
function resolveKeys(
  keys: Readonly<Record<string, KeyShape>>,
  node: Tree | undefined,
  at: Span,
  scope: Scope,
  report: Report,
  within = "",
): Keys {
  const values: Record<string, Value> = {};
  const counts: Record<string, number> = {};
  const words: Record<string, string> = {};
  for (const [key, { shape, required }] of Object.entries(keys)) {
    const written = child(node, key);
    const name = within + key;
    if (shape.is === "quantity" && (written || required)) {
      const value = resolveValue(written, dimensionsOf(shape.dimension), scope, report);
      values[name] = value ?? unknownValue(written?.at ?? node?.at ?? at);
    }
    if (!written || shape.is === "quantity") continue;
    if (shape.is === "record") {
      const inside = resolveKeys(shape.keys, written, at, scope, report, `${name}.`);
      Object.assign(values, inside.values);
      Object.assign(counts, inside.counts);
      Object.assign(words, inside.words);
    } else if (shape.is === "whole" && written.type === "scalar") {
      const count = Number(written.text);
      // Another is told with the shape.
      if (Number.isInteger(count) && count <= (shape.atMost ?? Number.MAX_SAFE_INTEGER)) counts[name] = count;
    }
    if (shape.is === "choice" && written.type === "scalar") words[name] = written.text;
  }
  return { values, counts, words };
}
