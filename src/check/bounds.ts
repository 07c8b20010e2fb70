import type { Rule } from "./rule.js";

/** Bounds in order, the start value between them, and logarithmic spacing only above zero. */
export const parameterBounds: Rule = (network, report, { env, say }) => {
  for (const p of network.names) {
    if (!p.between) continue;
    const [low, high] = p.between.map((b) => b.of(env));
    const value = p.value.of(env);
    if (![low, high, value].every(Number.isFinite)) continue; // another rule says so
    const text = (x: number) => say(x, p.value.dimension, p.value.unit);
    if (!(low < high)) report("bounds-reversed", p.between[0].at, { name: p.name, low: text(low), high: text(high) });
    else if (value < low || value > high) {
      report("start-outside-bounds", p.value.at, {
        name: p.name,
        value: text(value),
        low: text(low),
        high: text(high),
      });
    } else if (p.spacing === "log" && low <= 0) report("log-bounds", p.between[0].at, { name: p.name });
  }
};

/** `requires:` holds at the start values. */
export const requirements: Rule = (network, report, { env, say }) => {
  for (const r of network.requires) {
    if (r.slack(env) > 0) continue;
    const [left, right] = [r.left, r.right].map((side) => say(side.of(env), side.dimension, side.unit));
    report("requirement-broken", r.at, { text: r.text, left, right });
  }
};

/** A share that may grow to everything beside `rest`. */
export const sharesBesideRest: Rule = (network, report, { env }) => {
  for (const node of [...network.feeds, ...network.compartments]) {
    if (!node.streams.some((s) => s.split.is === "rest")) continue;
    for (const s of node.streams) {
      if (s.split.is !== "share" || s.split.value.expression.type !== "name") continue;
      const name = s.split.value.expression.name;
      const p = network.names.find((n) => n.name === name);
      if (p?.between && p.between[1].of(env) >= 1)
        report("share-all", p.between[1].at, { name: node.name, parameter: name });
    }
  }
};
