import { mkdirSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import type { Bench } from "../cases.js";
import { logOf, logTrial } from "../log-trial.js";

/** A log of a reading a second for a day, beside the same test read a thousand times. */
export const log: Bench = {
  name: "log",
  says: "fit to a log of 100,000 readings beside one of 1,000",
  async *plan({ root, work, own }) {
    const folder = join(work, "cases");
    mkdirSync(folder, { recursive: true });
    const network = join(root, "test/fit/p1/p1.yaml");
    const contestants = [1000, 100_000].map((n) => {
      writeFileSync(join(folder, `log-${n}.csv`), logOf(n));
      const trial = join(folder, `log-${n}.yaml`);
      writeFileSync(trial, logTrial(`log-${n}.csv`));
      const command = own("log", network, trial);
      return {
        name: `${n.toLocaleString("en")} readings`,
        own: true,
        command,
        error: ({ printed }: { printed: Readonly<Record<string, unknown>> }) => Number(printed.deviations),
      };
    });
    yield {
      title: "fit alone, warm",
      target: "at most 3 times as long, the same answer",
      rounds: 2,
      limit: 600,
      error: "st. errors off",
      contestants,
      notes: ([short, long]) => [
        `the long log takes ${((long.seconds ?? Number.NaN) / (short.seconds ?? Number.NaN)).toPrecision(3)} times as long; the last column but one is how far the four parameters are from the truth, the largest`,
      ],
    };
  },
};
