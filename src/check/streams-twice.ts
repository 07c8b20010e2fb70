import { unknownKind } from "../compartments/unknown.js";
import type { Rule } from "./rule.js";

/** Two streams from a place to one and the same place under two names: `chain` is entered at `chain.1`, a part at its only inlet. */
export const streamsTwice: Rule = (network, report) => {
  // The streams of a part that could not be read leave it by outlets that nobody knows.
  const bodies = network.compartments.filter((c) => c.kind !== unknownKind);
  for (const { name, streams } of [...network.feeds, ...bodies]) {
    const first = new Map<string, string>();
    for (const { to, enters, leaves, unknown, at } of streams) {
      if (unknown || leaves !== undefined) continue;
      const end = enters === undefined ? to : `${to}.${enters}`;
      const text = at.source.text.slice(at.from, at.to);
      const before = first.get(end);
      if (before === undefined) first.set(end, text);
      else report("stream-twice", at, { name, to: text, before });
    }
  }
};
