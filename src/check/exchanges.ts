import { memberOf, rowMeant } from "../model/members.js";
import type { Compartment } from "../model/network.js";
import type { Rule } from "./rule.js";

/** Exchange is between two single stirred bodies, or one and a member of a `repeat`, and written once. */
export const exchanges: Rule = (network, report, { nearest }) => {
  const bodies = new Map(network.compartments.map((c) => [c.name, c]));
  const seen = new Map<string, (typeof network)["at"]>();
  for (const c of network.compartments) {
    if (!c.kind.exchanges) continue; // told with the shape
    for (const e of c.exchanges) {
      const member = memberOf(network.compartments, e.partner);
      const partner = bodies.get(e.partner) ?? member;
      if (!partner) {
        const known = network.compartments.filter((b) => b !== c && refusal(b).length === 0).map((b) => b.name);
        const near = nearest(e.partner, known);
        report("unknown-place", e.at, {
          name: e.partner,
          wanted: "stirred tank",
          nearest: near,
          known,
          row: rowMeant(network.compartments, e.partner),
        });
        continue;
      }
      const refused = (member ? [c] : [c, partner]).find((b) => refusal(b).length > 0);
      const why = partner === c ? "that is the tank itself" : refused && refusal(refused)[0];
      if (why) {
        const row = refused && memberOf([refused], `${refused.name}.1`)?.name;
        report("exchange-partner", e.at, { name: c.name, partner: e.partner, why, row });
        continue;
      }
      const key = [c.name, e.partner].sort().join(" ");
      const earlier = seen.get(key);
      if (earlier) {
        report(
          "exchange-twice",
          e.at,
          { name: c.name, partner: e.partner },
          { at: earlier, says: "written first here" },
        );
      } else seen.set(key, e.at);
    }
  }
};

function refusal(body: Compartment): string[] {
  if (!body.kind.exchanges) return [`'${body.name}' is of \`kind: ${body.kind.name}\``];
  return body.kind.mayExchange(body.counts) ? [] : [`'${body.name}' is ${body.counts.repeat} tanks in series`];
}
