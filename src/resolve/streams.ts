import type { Exchange, Stream } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { entriesOf, type Tree } from "../read/tree.js";
import { inBasis } from "../units/basis.js";
import { dimensions } from "../units/dimension.js";
import { unknownStream, unknownValue } from "./unknown.js";
import { resolveValue, type Scope } from "./value.js";

/** A `to:`: one name takes all, a map splits. Names are looked up later, when all are known. */
export function resolveStreams(node: Tree | undefined, scope: Scope, report: Report): Stream[] {
  if (!node || node.type === "list") return [];
  if (node.type === "scalar") return node.empty ? [] : [{ to: node.text, at: node.at, split: { is: "all" } }];
  const streams: Stream[] = [];
  for (const { key, value } of node.entries) {
    if (value.type === "scalar" && value.text === "rest") {
      streams.push({ to: key.text, at: key.at, split: { is: "rest" } });
      continue;
    }
    // The dimension of the value tells a share from a flow.
    const amount = resolveValue(value, [dimensions.ratio, dimensions.flow], { ...scope, words: ["rest"] }, report);
    if (!amount) {
      streams.push(unknownStream(key.text, key.at));
      continue;
    }
    const is = amount.dimension.every((x) => x === 0) ? "share" : "flow";
    streams.push({ to: key.text, at: key.at, split: { is, value: amount } });
  }
  return streams;
}

/** An `exchange:`: partner -> flow, equal both ways. */
export function resolveExchanges(node: Tree | undefined, scope: Scope, report: Report): Exchange[] {
  return entriesOf(node).map(({ key, value }) => {
    const flow =
      resolveValue(value, dimensions.flow, scope, report) ??
      unknownValue(value.at, inBasis(dimensions.flow, scope.basis ?? "volume"));
    return { partner: key.text, at: key.at, flow };
  });
}
