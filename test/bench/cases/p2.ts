import { join } from "node:path";
import { type Bench, type Planned, type Setting, sizesOf } from "../cases.js";
import { type Contestant, type Run, solveSeconds } from "../contest.js";
import { curveError } from "../curve.js";
import { latticeCase } from "../lattice.js";

/** Tracer curve of a lattice of stirred cells: 200 samples over three mean times after a pulse into the feed. */
export const p2: Bench = {
  name: "p2",
  says: "tracer curve of a lattice of stirred cells, 200 samples to 3 mean times",
  grows: true,
  async *plan(setting) {
    for (const size of sizesOf([1000, 8000, 64_000, 512_000], setting)) yield lattice(setting, size);
    for (const size of sizesOf([1000, 8000], setting)) yield wide(setting, size);
  },
};

async function lattice(setting: Setting, size: number): Promise<Planned> {
  const { peers, root } = setting;
  const folder = await latticeCase(join(setting.work, "cases"), size, "even");
  const out = (name: string): string => join(folder, `${name}.csv`);
  const reference = join(root, `test/bench/references/p2-${size}.csv`);
  const cvode = (mode: string): Contestant[] =>
    peers.compiled(`CVODE ${mode}`, "p2_cvode", folder, mode, "1e-6", "1e-3", out(mode));
  const scipy = (mode: string): Contestant[] => peers.scipy(`SciPy ${mode}`, "p2_scipy.py", folder, mode, out(mode));
  const large = size > 64_000;
  return {
    title: `${size.toLocaleString("en")} cells`,
    target: "10 times faster than the best peer, error under 1e-6 of the peak",
    rounds: large ? 1 : size > 8000 ? 2 : 5,
    limit: 600,
    size,
    error: "error/peak",
    contestants: checked(reference, [
      { name: "the curve, again", own: true, command: setting.own("p2", folder, out("own")) },
      ...peers.compiled("ARKODE order 5", "p2_arkode", folder, "1e-6", "1e-3", out("arkode")),
      ...cvode("spgmr-ilu0"),
      ...scipy("rk45"),
      ...scipy("expm"),
      ...(size <= 1000 ? cvode("klu-amd") : []),
    ]),
    notes: details,
  };
}

/** Volumes over four decades: rates spread as in real zone maps. */
async function wide(setting: Setting, size: number): Promise<Planned> {
  const { peers, root } = setting;
  const folder = await latticeCase(join(setting.work, "cases"), size, "wide");
  const out = (name: string): string => join(folder, `${name}.csv`);
  const cvode = (mode: string): Contestant[] =>
    peers.compiled(`CVODE ${mode}`, "p2_cvode", folder, mode, "1e-6", "1e-3", out(mode));
  return {
    title: `${size.toLocaleString("en")} cells, volumes over four decades`,
    target: "not slower than the best peer, error under 1e-6 of the peak",
    rounds: 3,
    limit: 600,
    error: "error/peak",
    contestants: checked(join(root, `test/bench/references/p2-${size}-wide.csv`), [
      { name: "the curve, again", own: true, command: setting.own("p2", folder, out("own")) },
      ...cvode("spgmr-ilu0"),
      ...(size <= 1000 ? cvode("klu-amd") : []),
      ...(size <= 1000 ? peers.scipy("SciPy bdf", "p2_scipy.py", folder, "bdf", out("bdf")) : []),
    ]),
    notes: details,
  };
}

/** The curve that each writes as its last argument (a peer's, too) against the reference. */
const checked = (reference: string, contestants: readonly Contestant[]): Contestant[] =>
  contestants.map((c) => ({
    ...c,
    seconds: solveSeconds,
    error: (_: Run) => curveError(c.command[c.command.length - 1], reference),
  }));

function details(standings: readonly { own: boolean; printed: Readonly<Record<string, unknown>> }[]): string[] {
  const own = standings.find((s) => s.own)?.printed ?? {};
  const seconds = (key: string): string => (typeof own[key] === "number" ? `${own[key].toPrecision(3)} s` : "-");
  const small = (key: string): string => Number(own[key]).toExponential(1);
  return [
    `backmix by '${String(own.method)}': curve, integral and balance; first time in a process ${seconds("first_s")}, tables read and compiled in ${seconds("read_s")}`,
    `moments besides ${seconds("moments_s")}; mean off V/Q by ${small("mean_off")}, tracer balance by ${small("closure")}`,
  ];
}
