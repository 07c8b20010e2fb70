import { join } from "node:path";
import type { Bench } from "../cases.js";
import { type Contestant, solveSeconds } from "../contest.js";
import { curveError } from "../curve.js";

/** Start-up of 12 tanks with a reaction ten million times faster than the slowest. */
export const p4: Bench = {
  name: "p4",
  says: "stiff start-up, 12 tanks, 4 species, relative tolerance 1e-6",
  async *plan({ root, work, own, peers }) {
    const folder = join(root, "test/bench/p4");
    const reference = join(root, "test/bench/references/p4.csv");
    const out = (name: string): string => join(work, `p4-${name}.csv`);
    const contestants: { at: string; contestant: Contestant }[] = [];
    const add = (at: string, found: readonly Contestant[]): void => {
      for (const contestant of found) contestants.push({ at, contestant });
    };
    add(out("own"), [{ name: "integrate, again", own: true, command: own("p4", folder, out("own")) }]);
    add(out("transient"), [
      {
        name: "transient, a vessel and a chemistry",
        own: true,
        command: own("p4-transient", folder, out("transient")),
      },
    ]);
    const cvode = (name: string, at: string, ...more: string[]): void =>
      add(at, peers.compiled(name, "p4_cvode", folder, "1e-6", "1e-10", at, "20", ...more));
    cvode("CVODE BDF + KLU", out("klu"), "klu");
    cvode("CVODE BDF, dense", out("dense"));
    for (const mode of ["LSODA", "BDF", "Radau"]) {
      add(out(mode), peers.scipy(`SciPy ${mode}`, "p4_scipy.py", folder, mode, out(mode)));
    }
    yield {
      title: "stiff start-up, warm; of ours and the compiled ones the quickest of 20 runs",
      target: "within 3 times CVODE + KLU (a ratio of 0.33), faster than LSODA",
      rounds: 5,
      limit: 60,
      error: "error/largest",
      contestants: contestants.map(({ at, contestant }) => ({
        ...contestant,
        seconds: solveSeconds,
        error: () => curveError(at, reference),
      })),
    };
  },
};
