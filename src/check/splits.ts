import { isClosed } from "../model/network.js";
import type { Rule } from "./rule.js";

const ratio = [0, 0, 0, 0, 0, 0, 0];

/** How a node divides what leaves it: shares within 0 to 100 %, adding to 100 % or leaving a `rest`. */
export const splits: Rule = (network, report, { env, say }) => {
  for (const { name, streams, toAt } of [...network.feeds, ...network.compartments]) {
    if (streams.length === 0 || streams.some((s) => s.split.is === "all")) continue;
    let total = 0;
    let rests = 0;
    let fixed = false;
    let within = true;
    for (const { split, at, to } of streams) {
      if (split.is === "flow") fixed = true;
      if (split.is === "rest" && ++rests === 2) report("rest-twice", at, { name });
      if (split.is !== "share") continue;
      const share = split.value.of(env);
      total += share;
      if (share >= 0 && share <= 1) continue;
      within = false;
      if (!Number.isFinite(share)) continue; // another rule says so
      const recycle = share > 1 ? say(share / (1 + share), ratio) : undefined;
      report("share-range", split.value.at, { name, to, value: say(share, ratio), recycle });
    }
    const rest = rests > 0;
    // In a closed vessel fixed flows alone are right: they are held to what arrives when the flows are balanced.
    if (isClosed(network) && streams.every((s) => s.split.is === "flow")) continue;
    if (fixed && !rest) report("rest-missing", toAt, { name });
    else if (within && (rest ? total > 1 + 1e-9 : Math.abs(total - 1) > 1e-9)) {
      report("share-sum", toAt, { name, total: say(total, ratio), rest });
    }
  }
};
