import { mkdirSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import type { Bench } from "../cases.js";
import { chainNetwork } from "../chain.js";
import type { Contestant } from "../contest.js";

/** How long the program takes to be there, beside Node itself. */
export const startUp: Bench = {
  name: "start-up",
  says: "whole processes, beside Node that does nothing",
  async *plan({ root, work }) {
    const program = join(root, "dist/backmix.js");
    mkdirSync(join(work, "cases"), { recursive: true });
    const files = [20, 500].map((n) => {
      const path = join(work, "cases", `chain-${n}.yaml`);
      writeFileSync(path, chainNetwork(n));
      return { n, path };
    });
    const whole = (name: string, ...args: string[]): Contestant => ({
      name,
      own: name.startsWith("backmix"),
      command: [process.execPath, ...args],
      seconds: (run) => run.whole,
    });
    yield {
      title: "start-up",
      target: "Node + 15 ms (--version), + 40 ms (20 compartments), under 300 ms in all (500 compartments)",
      rounds: 15,
      limit: 20,
      contestants: [
        whole("node -e 0", "-e", "0"),
        whole("backmix --version", program, "--version"),
        ...files.map(({ n, path }) => whole(`backmix check, ${n} compartments`, program, "check", path)),
      ],
      notes: ([bare, ...ours]) =>
        ours.map(
          (s) => `${s.name}: Node + ${(1000 * ((s.seconds ?? Number.NaN) - (bare.seconds ?? 0))).toFixed(0)} ms`,
        ),
    };
  },
};
