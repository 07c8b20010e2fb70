import { compile } from "../compile/compile.js";
import { evaluateNames } from "../compile/evaluate.js";
import type { Network } from "../model/network.js";
import type { Report } from "../problems/report.js";

/** Above this many parameters only the corners with one parameter moved are looked at. */
const fewParameters = 8;

/** Warns once where a corner of the bounds that `requires:` allows makes a volume or flow impossible. */
export function cornerWarnings(network: Network, report: Report): void {
  const env = evaluateNames(network);
  const moved = network.names.flatMap((n) =>
    n.between ? [{ name: n.name, at: n.at, ends: n.between.map((b) => b.of(env)) }] : [],
  );
  const count = moved.length <= fewParameters ? 2 ** moved.length : 2 * moved.length;
  for (let c = 0; c < count; c++) {
    const chosen =
      moved.length <= fewParameters
        ? moved.map((m, i) => ({ ...m, end: (c >> i) & 1 }))
        : [{ ...moved[c >> 1], end: c & 1 }];
    const settings = Object.fromEntries(chosen.map((m) => [m.name, m.ends[m.end]]));
    const values = evaluateNames(network, settings);
    if (network.requires.some((r) => !(r.slack(values) > 0))) continue;
    const [problem] = compile(network, settings).problems;
    if (!problem) continue;
    report("bound-corner", moved[0].at, { name: chosen.map((m) => m.name).join(", "), why: problem.message });
    return;
  }
}
