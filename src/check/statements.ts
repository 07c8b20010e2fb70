import { memberOf, rowMeant } from "../model/members.js";
import { isClosed } from "../model/network.js";
import { followsKnown } from "./follows.js";
import type { Rule } from "./rule.js";

/** What `checks:` speak of is there. */
export const checkSubjects: Rule = (network, report, { nearest }) => {
  const names = (places: readonly { readonly name: string }[]): string[] => places.map((p) => p.name);
  const subjects = {
    "mean-time": { wanted: "outlet", known: ["all", ...names(network.outlets)] },
    volume: { wanted: "compartment", known: ["all", ...names([...network.compartments, ...network.groups])] },
    flow: {
      wanted: "compartment, feed or outlet",
      known: names([
        ...network.feeds,
        ...network.compartments.filter((c) => c.kind.flows),
        ...network.groups,
        ...network.outlets,
      ]),
    },
  };
  for (const { what, of, ofAt, follows } of network.checks) {
    if (follows) followsKnown(network, follows, report);
    if (what === "mean-time" && isClosed(network)) {
      report("closed-mean-time", ofAt, {});
      continue;
    }
    const { wanted, known } = subjects[what];
    if (what !== "mean-time" && memberOf(network.compartments, of)) continue;
    const row = what === "mean-time" ? undefined : rowMeant(network.compartments, of);
    if (!known.includes(of))
      report("unknown-place", ofAt, { name: of, wanted, nearest: nearest(of, known), known, row });
  }
};
