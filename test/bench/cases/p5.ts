import { join } from "node:path";
import type { Bench } from "../cases.js";
import type { Run } from "../contest.js";

/** 500 residual-bootstrap refits of p1, two cores. */
export const p5: Bench = {
  name: "p5",
  says: "500 bootstrap refits of p1 on two cores",
  async *plan({ root, peers }) {
    const fit = [process.execPath, join(root, "dist/backmix.js"), "fit", join(root, "test/fit/p1/p1.yaml")];
    const trial = ["--trial", join(root, "test/fit/p1/p1-pulse.yaml")];
    const whole = { seconds: (run: Run) => run.whole };
    yield {
      title: "500 refits, whole processes",
      target: "6 times faster than two processes of the SciPy expert",
      rounds: 3,
      limit: 300,
      contestants: [
        {
          name: "backmix fit --bootstrap 500",
          own: true,
          command: [...fit, ...trial, "--bootstrap", "500", "--json"],
          ...whole,
        },
        ...peers.scipy("SciPy expert, 2 processes", "p5_bootstrap.py", "2").map((c) => ({ ...c, ...whole })),
      ],
      notes: (standings) =>
        standings
          .filter((s) => typeof s.printed.solve_s === "number")
          .map((s) => `${s.name}: refits alone ${Number(s.printed.solve_s).toPrecision(3)} s`),
    };
  },
};
