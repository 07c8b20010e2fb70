import type { Resampling } from "../fit/resample.js";
import { type Refits, refitsOf } from "../fit/resample.js";
import { parseNetwork } from "../parse/network.js";
import { parseTrial } from "../parse/trial.js";
import { decodeText } from "../read/decode.js";

/** All that a thread needs to refit: no file is read again. */
export interface RefitJob {
  readonly network: string;
  readonly trials: readonly string[];
  /** Every file that the documents were made from, by path. */
  readonly contents: ReadonlyMap<string, string | Uint8Array | undefined>;
  readonly free: readonly string[] | undefined;
  readonly values: Readonly<Record<string, number>>;
  readonly resampling: Resampling | undefined;
  readonly seed: number;
}

/** Refits numbered from `from` up to, not including, `to`. */
export interface RefitSpan {
  readonly from: number;
  readonly to: number;
}

/** Values of refits by number; null where one did not converge. */
export type RefitRows = readonly (readonly [number, readonly number[] | null])[];

/** The refits of a job, its documents parsed anew. */
export function refitsOfJob({ network, trials, contents, ...options }: RefitJob): Refits | undefined {
  const document = <T>(path: string, parse: typeof parseNetwork | typeof parseTrial): T | undefined => {
    const content = contents.get(path);
    const settings = { path, read: (p: string) => contents.get(p), allowOutside: true };
    return content === undefined ? undefined : (parse(decodeText(content), settings).document as T | undefined);
  };
  const vessel = document<Parameters<typeof refitsOf>[0]>(network, parseNetwork);
  const tests = trials.flatMap((path) => document<Parameters<typeof refitsOf>[1][number]>(path, parseTrial) ?? []);
  if (!vessel || tests.length < trials.length) return undefined;
  const { free, ...more } = options;
  const { resampling, ...rest } = more;
  return refitsOf(vessel, tests, { ...rest, ...(free ? { free } : {}), ...(resampling ? { resampling } : {}) });
}

export function rowsOf(refits: Refits, { from, to }: RefitSpan): RefitRows {
  return Array.from({ length: to - from }, (_, k) => [from + k, refits.refit(from + k) ?? null] as const);
}
