import { memberNumber, memberOf, rowMeant } from "../model/members.js";
import type { Rule } from "./rule.js";

/** Where streams and exchanges reach only later members of a repeat, nothing flows in those before, unless `backflow` gets there. */
export const membersReached: Rule = (network, report) => {
  const first = new Map<string, number>();
  const reach = (body: string, member: number): void => {
    first.set(body, Math.min(first.get(body) ?? Number.POSITIVE_INFINITY, member));
  };
  for (const node of [...network.feeds, ...network.compartments]) {
    for (const { to, enters } of node.streams) {
      reach(to, memberNumber(`.${enters ?? ""}`) ?? 1);
      // A tank that does not exist may be meant for any of the row.
      const meant = rowMeant(network.compartments, to);
      if (meant) reach(meant.name, 1);
    }
  }
  for (const { partner } of network.compartments.flatMap((c) => c.exchanges)) {
    const body = memberOf(network.compartments, partner);
    if (body) reach(body.name, memberNumber(partner) ?? 1);
  }
  for (const { name, at, counts, values } of network.compartments) {
    const reached = first.get(name) ?? 1;
    if ((counts.repeat ?? 1) === 1 || values.backflow || reached === 1) continue;
    report("unreachable", at, { names: Array.from({ length: reached - 1 }, (_, i) => `${name}.${i + 1}`) });
  }
};
