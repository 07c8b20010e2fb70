import { spawn } from "node:child_process";

/** A program that does a job and prints one JSON document as its last line. */
export interface Contestant {
  readonly name: string;
  readonly own: boolean;
  readonly command: readonly string[];
  /** What of a run is compared: seconds. Default: `solve_s` of what it printed. */
  readonly seconds?: (run: Run) => number | undefined;
  /** How far its answer is off, in the unit of the contest; undefined where it gave none. */
  readonly error?: (run: Run) => number | undefined;
}

export interface Run {
  /** Seconds from start to end of the process. */
  readonly whole: number;
  /** The JSON that it printed, or nothing. */
  readonly printed: Readonly<Record<string, unknown>>;
  /** Why there is no answer. */
  readonly failed?: string;
}

export interface Standing {
  readonly name: string;
  readonly own: boolean;
  /** Medians over the rounds. */
  readonly seconds: number | undefined;
  readonly whole: number;
  /** Largest of the rounds, MB. */
  readonly memory: number | undefined;
  readonly error: number | undefined;
  /** Median over the rounds of the best peer's seconds over its own. */
  readonly timesFaster: number | undefined;
  readonly failed?: string;
  /** What the last run printed. */
  readonly printed: Readonly<Record<string, unknown>>;
}

/**
 * Runs contestants in turn, round after round, so that a busy machine burdens all alike.
 * @param limit seconds after which a run is ended; one that failed is not run again
 */
export async function contest(contestants: readonly Contestant[], rounds: number, limit: number): Promise<Standing[]> {
  const runs = contestants.map((): Run[] => []);
  for (let round = 0; round < rounds; round++) {
    for (let i = 0; i < contestants.length; i++) {
      if (!runs[i].some((r) => r.failed)) runs[i].push(await runOnce(contestants[i].command, limit));
    }
  }
  const seconds = contestants.map((c, i) =>
    runs[i].map((r) => (r.failed ? undefined : (c.seconds ?? solveSeconds)(r))).filter((s) => s !== undefined),
  );
  const best = contestants.reduce(
    (least, c, i) => (!c.own && median(seconds[i]) < median(seconds[least] ?? []) ? i : least),
    -1,
  );
  return contestants.map((c, i): Standing => {
    const failed = runs[i].find((r) => r.failed)?.failed;
    const last = runs[i][runs[i].length - 1];
    const errors = failed ? [] : runs[i].map((r) => c.error?.(r)).filter((e) => e !== undefined);
    const memory = runs[i].map((r) => Number(r.printed.peak_kB)).filter((m) => m > 0);
    const ratios = best < 0 || failed ? [] : seconds[i].map((s, k) => seconds[best][k] / s).filter(Number.isFinite);
    return {
      name: c.name,
      own: c.own,
      seconds: finite(median(seconds[i])),
      whole: median(runs[i].map((r) => r.whole)),
      memory: memory.length > 0 ? Math.max(...memory) / 1024 : undefined,
      error: errors.length > 0 ? Math.max(...errors) : undefined,
      timesFaster: finite(median(ratios)),
      ...(failed ? { failed } : {}),
      printed: last.printed,
    };
  });
}

export const solveSeconds = ({ printed }: Run): number | undefined =>
  typeof printed.solve_s === "number" ? printed.solve_s : undefined;

/** Infinity where there is nothing. */
export function median(values: readonly number[]): number {
  if (values.length === 0) return Number.POSITIVE_INFINITY;
  const sorted = [...values].sort((a, b) => a - b);
  return (sorted[(sorted.length - 1) >> 1] + sorted[sorted.length >> 1]) / 2;
}

const finite = (x: number): number | undefined => (Number.isFinite(x) ? x : undefined);

function runOnce([program, ...args]: readonly string[], limit: number): Promise<Run> {
  return new Promise((resolve) => {
    const began = performance.now();
    // One thread each, as the jobs are to be compared.
    const child = spawn(program, args, { env: { ...process.env, OPENBLAS_NUM_THREADS: "1", NO_COLOR: "1" } });
    let [out, err, late] = ["", "", false];
    child.stdout.on("data", (d) => {
      out += d;
    });
    child.stderr.on("data", (d) => {
      err += d;
    });
    const timer = setTimeout(() => {
      late = true;
      child.kill();
    }, limit * 1000);
    const done = (failed?: string): void => {
      clearTimeout(timer);
      const whole = (performance.now() - began) / 1000;
      resolve({ whole, printed: lastJson(out) ?? {}, ...(failed ? { failed } : {}) });
    };
    child.on("error", (e) => done(e.message));
    child.on("close", (code) => {
      const why = late ? `stopped after ${limit} s` : code === 0 ? undefined : lastLine(err) || `status ${code}`;
      done(why);
    });
  });
}

/** The whole output, or its last line, as JSON. */
function lastJson(out: string): Record<string, unknown> | undefined {
  for (const text of [out, lastLine(out)]) {
    try {
      const value: unknown = JSON.parse(text);
      if (typeof value === "object" && value !== null) return value as Record<string, unknown>;
    } catch {
      // Not this one.
    }
  }
  return undefined;
}

const lastLine = (text: string): string => text.trim().split("\n").at(-1) ?? "";
