import type { Compartment, Stream } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { entriesOf, type Tree } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import { dimensions } from "../units/dimension.js";
import { checkName } from "./check-name.js";
import { resolveValue, type Scope } from "./value.js";

/** Binds `sends:` of a body to the streams that it divides; their names are those of its `to`. */
export function resolveSends(
  body: string,
  node: Tree | undefined,
  streams: readonly Stream[],
  scope: Scope,
  report: Report,
): Pick<Compartment, "streams" | "sends"> {
  const entries = entriesOf(node);
  if (entries.length === 0) return { streams };
  const carries = streams.map(() => new Map<string, Value | "rest">());
  const known = streams.map((s) => s.to);
  const unknown = new Set<string>();
  for (const { key, value } of entries) {
    checkName(key, report);
    if (value.type !== "map") unknown.add(key.text);
    for (const share of entriesOf(value)) {
      const k = known.indexOf(share.key.text);
      if (k < 0) {
        const near = nearest(share.key.text, known);
        report("sends-where", share.key.at, { name: share.key.text, body, nearest: near, known });
        unknown.add(key.text);
        continue;
      }
      const rest = share.value.type === "scalar" && share.value.text === "rest";
      const part = rest ? "rest" : resolveValue(share.value, dimensions.ratio, scope, report);
      if (part) carries[k].set(key.text, part);
      else unknown.add(key.text);
    }
  }
  return {
    streams: streams.map((s, k) => (carries[k].size > 0 ? { ...s, carries: carries[k] } : s)),
    sends: entries.map(({ key }) => ({ of: key.text, at: key.at, unknown: unknown.has(key.text) })),
  };
}
