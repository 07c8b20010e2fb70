import { checkDuty } from "../../check/duty.js";
import { compile } from "../../compile/compile.js";
import type { Duty } from "../../model/duty.js";
import { isClosed, type Network } from "../../model/network.js";
import type { Problem } from "../../problems/problem.js";
import { collector, hasErrors } from "../../problems/report.js";
import { inputsOf } from "../../study/inputs.js";
import { type Operation, operate } from "../../study/operate.js";
import { spaced, sweep } from "../../study/sweep.js";
import { estimateLine } from "../digits.js";
import type { Figure } from "../input.js";
import { estimate, readingUnit } from "../study/estimate.js";
import { plotSweep } from "../study/sweep-figure.js";

/** Larger plants take longer than a save should. */
const largestPlant = 600;
const points = 7;

/** What a duty reports in each of the vessels that are watched beside it, over half to one and a half times its flow; and what is wrong there. */
export function dutyFigures(
  duty: Duty,
  networks: readonly Network[],
): { readonly figures: readonly Figure[]; readonly problems: readonly Problem[] } {
  const problems: Problem[] = [];
  const figures = networks.flatMap((network, k): Figure[] => {
    const own = collector();
    if (!isClosed(network)) checkDuty(network, duty, own.report);
    problems.push(...own.problems);
    const { plant } = compile(network);
    const steady = duty.report.filter((line) => line.what !== "time-beyond");
    if (isClosed(network) || hasErrors(own.problems) || !plant || plant.columns.size > largestPlant) return [];
    return steady.length === 0
      ? []
      : overFlow({ network, duty: { ...duty, report: steady }, values: {}, kinetics: new Map() }, k);
  });
  return { figures, problems };
}

function overFlow(operation: Operation, k: number): Figure[] {
  const { network, duty } = operation;
  const feed = [...network.feeds].sort((a, b) => b.flow.of([]) - a.flow.of([]))[0];
  const input = inputsOf(operation).find((i) => i.name === `${feed?.name}.flow`);
  const { figures } = operate(operation);
  if (!input || !figures) return [];
  const values = spaced(0.5 * input.value, 1.5 * input.value, points, false);
  const found = sweep(operation, [{ input, values, log: false }], []);
  const told = figures.map((f) => {
    const unit = readingUnit(duty, f.name, f.unit);
    return `${f.name} ${f.why ?? estimateLine(estimate(f.value, undefined, unit))}`;
  });
  return [
    {
      name: `duty-${k + 1}`,
      ...plotSweep(found, { untitled: true }),
      caption: `${network.title}, at the values of its file: ${told.join(", ")}. The curves go over its flow.`,
    },
  ];
}
