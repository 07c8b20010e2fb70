import { execFileSync } from "node:child_process";
import { existsSync, mkdirSync } from "node:fs";
import { join } from "node:path";
import type { Contestant } from "./contest.js";

const python = "/usr/bin/python3";
const solvers = "-lsundials_nvecserial -lsundials_sunmatrixsparse -lsundials_sunlinsolklu -lsundials_sunlinsolspgmr";
const cvode = `-lsundials_cvode ${solvers} -lsundials_sunmatrixdense -lsundials_sunlinsoldense -lsundials_sunnonlinsolfixedpoint`;
const libraries: Readonly<Record<string, string>> = {
  p2_cvode: cvode,
  p2_arkode: "-lsundials_arkode -lsundials_nvecserial",
  p3_kinsol: `-lsundials_kinsol ${solvers} -lsundials_sunlinsolspbcgs`,
  p4_cvode: cvode,
};
const always = "-lsundials_generic -lklu -lamd -lcolamd -lbtf -lsuitesparseconfig -lm";

/** What an engineer would write today with general-purpose libraries, as far as they are on this machine. */
export interface Peers {
  /** Why some are left out; nothing where all are there. */
  readonly missing: readonly string[];
  /** None where Python with SciPy is not there. */
  scipy(name: string, script: string, ...args: string[]): Contestant[];
  /** None where no C compiler with the solver libraries is there. */
  compiled(name: string, program: string, ...args: string[]): Contestant[];
}

/**
 * Looks what is there and compiles the C programs.
 * @param sources folder of the peers' sources
 * @param build   folder for the programs
 */
export function findPeers(sources: string, build: string): Peers {
  const missing: string[] = [];
  const scipy = runs(python, ["-c", "import scipy"]);
  if (!scipy) missing.push(`${python} with scipy is not here (Debian: python3-scipy): its peers are left out`);
  const compiled = compileAll(sources, build);
  if (!compiled) {
    missing.push(
      "no C compiler with SUNDIALS and SuiteSparse is here (Debian: gcc, libsundials-dev, libsuitesparse-dev): its peers are left out",
    );
  }
  return {
    missing,
    scipy: (name, script, ...args) =>
      scipy ? [{ name, own: false, command: [python, join(sources, script), ...args] }] : [],
    compiled: (name, program, ...args) =>
      compiled ? [{ name, own: false, command: [join(build, program), ...args] }] : [],
  };
}

function compileAll(sources: string, build: string): boolean {
  mkdirSync(build, { recursive: true });
  return Object.entries(libraries).every(([program, own]) => {
    if (existsSync(join(build, program))) return true;
    const options = ["-O3", "-march=native", "-w", "-I/usr/include/suitesparse", ...mpi()];
    const source = join(sources, `${program}.c`);
    return runs("cc", [...options, "-o", join(build, program), source, ...own.split(" "), ...always.split(" ")]);
  });
}

/** Where the solver libraries were built with a message-passing library, its headers are wanted too. */
function mpi(): string[] {
  try {
    const found = execFileSync("pkg-config", ["--cflags", "ompi-c"], { stdio: ["ignore", "pipe", "ignore"] });
    return String(found).trim().split(/\s+/).filter(Boolean);
  } catch {
    return [];
  }
}

function runs(program: string, args: readonly string[]): boolean {
  try {
    execFileSync(program, args, { stdio: "ignore" });
    return true;
  } catch {
    return false;
  }
}
