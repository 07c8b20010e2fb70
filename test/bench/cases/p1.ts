import { join } from "node:path";
import type { Bench } from "../cases.js";
import type { Run } from "../contest.js";

/** Global optimum of the residual sum of squares, (g/L)2: 47 starts with central differences. */
export const bestSum = 7.385123385e-5;
const off = ({ printed }: Run): number | undefined =>
  typeof printed.ssr === "number" ? printed.ssr / bestSum - 1 : undefined;

/** Six parameters from 200 samples; the sum of squares has steps and false optima. */
export const p1: Bench = {
  name: "p1",
  says: "fit of bypass, tube, tank and quiet corner to 200 samples, six parameters",
  async *plan({ root, own, peers }) {
    const network = join(root, "test/fit/p1/p1.yaml");
    const trial = join(root, "test/fit/p1/p1-pulse.yaml");
    const expert = peers.scipy("SciPy expert, closed form, 24 starts", "p1_expert.py");
    const ordinary = peers.scipy("SciPy, 50 cells, LSODA, one start", "p1_practitioner.py");
    const fitSeconds = ({ printed }: Run): number | undefined => Number(printed.fit_s);
    yield {
      title: "fit alone, warm",
      target: "5 times faster than the SciPy expert, the same optimum",
      rounds: 3,
      limit: 120,
      error: "sum/best - 1",
      contestants: [
        { name: "fit, again", own: true, command: own("p1", network, trial), error: off },
        ...expert.map((c) => ({ ...c, seconds: fitSeconds, error: off })),
      ],
    };
    const whole = { seconds: (run: Run) => run.whole };
    const command = [process.execPath, join(root, "dist/backmix.js"), "fit", network, "--trial", trial, "--json"];
    const printed = (run: Run): number | undefined =>
      off({ ...run, printed: { ssr: run.printed.residualSumOfSquares } });
    yield {
      title: "whole process, files read and result printed",
      target: "under the SciPy expert, a tenth of the ordinary script",
      rounds: 5,
      limit: 120,
      error: "sum/best - 1",
      contestants: [
        { name: "backmix fit", own: true, command, ...whole, error: printed },
        ...expert.map((c) => ({ ...c, ...whole, error: off })),
        ...ordinary.map((c) => ({ ...c, ...whole, error: off })),
      ],
    };
  },
};
