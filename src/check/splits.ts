import type { Rule } from "./rule.js";

/** How a node divides what leaves it: shares within 0 to 100 %, adding to 100 % or leaving a `rest`. */
export const splits: Rule = (network, report, { env, say }) => {
  const ratio = [0, 0, 0, 0, 0, 0, 0];
  for (const node of [...network.feeds, ...network.compartments]) {
    const at = "toAt" in node ? node.toAt : (node.streams[0]?.at ?? node.at);
    let total = 0;
    let rests = 0;
    let fixed = false;
    for (const s of node.streams) {
      if (s.split.is === "share") {
        const share = s.split.value.of(env);
        total += share;
        if (!(share >= 0 && share <= 1)) {
          report("share-range", s.split.value.at, { name: node.name, to: s.to, value: say(share, ratio) });
        }
      } else if (s.split.is === "flow") fixed = true;
      else if (s.split.is === "rest" && ++rests === 2) report("rest-twice", s.at, { name: node.name });
    }
    const alone = node.streams.some((s) => s.split.is === "all");
    if (alone || node.streams.length === 0) continue;
    if (fixed && rests === 0) report("rest-missing", at, { name: node.name });
    else if (rests > 0 ? total > 1 + 1e-9 : Math.abs(total - 1) > 1e-9) {
      report("share-sum", at, { name: node.name, total: say(total, ratio) });
    }
  }
};
