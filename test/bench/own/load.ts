import { readFileSync } from "node:fs";
import { join } from "node:path";
import { compile, type Plant, parseNetwork } from "../../../src/index.js";
import type { Parsed } from "../../../src/parse/parsed.js";

/** What was parsed; its problems are thrown. */
export function wanted<T>({ document, problems }: Parsed<T>): T {
  if (!document) throw new Error(problems.map((p) => `${p.code}: ${p.message}`).join("; "));
  return document;
}

/** A file's text, and how to read the files that it names. */
export function fileOf(path: string): { text: string; options: { path: string; read(p: string): Uint8Array } } {
  return { text: readFileSync(path, "utf8"), options: { path, read: (p) => readFileSync(p) } };
}

/** The network of a lattice's folder, compiled; seconds that it took. */
export function latticePlant(folder: string): { plant: Plant; seconds: number } {
  const began = performance.now();
  const { text, options } = fileOf(join(folder, "lattice.yaml"));
  const { plant, problems } = compile(wanted(parseNetwork(text, options)));
  if (!plant) throw new Error(problems.map((p) => p.message).join("; "));
  return { plant, seconds: (performance.now() - began) / 1000 };
}

/** Seconds: such a run is not repeated to see it warm. */
const longRun = 5;

/** Runs a job at least `least` times more and until a second is over (one that takes long only once); seconds of the first and the median of the others. */
export function repeated<T>(job: () => T, least = 1, budget = 1): { first: number; again: number; result: T } {
  const times: number[] = [];
  let result: T;
  do {
    const began = performance.now();
    result = job();
    times.push((performance.now() - began) / 1000);
    if (times[0] > longRun) break;
  } while (times.length < least + 1 || (times.reduce((s, t) => s + t, 0) < budget && times.length < 200));
  const [first, ...others] = times;
  others.sort((a, b) => a - b);
  return { first, again: others[others.length >> 1] ?? first, result };
}

/**
 * Runs a short job until the compiler has seen it often enough, then as often as the compiled peers do.
 * @returns seconds of the very first run and of the quickest of those that count, as the peers tell theirs
 */
export function warmed<T>(job: () => T, unseen: number, counted: number): { first: number; best: number; result: T } {
  const timed = (): { seconds: number; result: T } => {
    const began = performance.now();
    const result = job();
    return { seconds: (performance.now() - began) / 1000, result };
  };
  const { seconds: first, result } = timed();
  for (let k = 0; k < unseen; k++) job();
  let best = Number.POSITIVE_INFINITY;
  for (let k = 0; k < counted; k++) best = Math.min(best, timed().seconds);
  return { first, best, result };
}
