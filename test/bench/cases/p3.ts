import { join } from "node:path";
import { type Bench, sizesOf } from "../cases.js";
import type { Contestant, Run } from "../contest.js";
import { latticeCase } from "../lattice.js";

/** Conversion of A and yield of R, on which three independent programs agree to all digits. */
const known: Readonly<Record<number, readonly [number, number]>> = {
  1000: [0.8674243024, 0.5453123464],
  8000: [0.8729837267, 0.5461719623],
  64000: [0.8728870607, 0.5457741957],
};

/** Steady state of A + B -> R, R + B -> S in a lattice of stirred cells. */
export const p3: Bench = {
  name: "p3",
  says: "steady state of two consecutive reactions of second order in a lattice of stirred cells",
  grows: true,
  async *plan(setting) {
    const { peers, own } = setting;
    for (const size of sizesOf([1000, 8000, 64_000, 512_000], setting)) {
      const folder = await latticeCase(join(setting.work, "cases"), size, "even");
      const scipy = (name: string, mode: string): Contestant[] => peers.scipy(name, "p3_scipy.py", folder, mode);
      const contestants = [
        { name: "steadyState, again", own: true, command: own("p3", folder) },
        ...peers.compiled("KINSOL + BiCGStab, block Jacobi", "p3_kinsol", folder, "spbcgs"),
        ...(size <= 8000 ? scipy("SciPy Newton + BiCGStab + spilu", "newton-ilu") : []),
        ...(size <= 1000 ? peers.compiled("KINSOL + KLU", "p3_kinsol", folder, "amd") : []),
        ...(size <= 1000 ? scipy("SciPy Newton + spsolve", "newton") : []),
      ];
      yield {
        title: `${size.toLocaleString("en")} cells`,
        target: `4 times faster than the best peer, balances closed to 1e-9${size > 64_000 ? ", under a minute" : ""}`,
        rounds: size > 64_000 ? 1 : size > 8000 ? 2 : 3,
        limit: 600,
        size,
        error: known[size] ? "error" : "",
        contestants: contestants.map((c) => ({ ...c, error: (run: Run) => off(run, known[size]) })),
        notes: (standings) => standings.filter((s) => s.own && !s.failed).map((s) => `closure ${s.printed.closure}`),
      };
    }
  },
};

const off = ({ printed }: Run, answer: readonly [number, number] | undefined): number | undefined =>
  answer && Math.max(Math.abs(Number(printed.conversion_A) - answer[0]), Math.abs(Number(printed.yield_R) - answer[1]));
