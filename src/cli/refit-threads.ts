import { availableParallelism } from "node:os";
import { Worker } from "node:worker_threads";
import type { Refits } from "../fit/resample.js";
import { type RefitJob, type RefitRows, type RefitSpan, rowsOf } from "./refit-job.js";
import { threadFile } from "./thread-file.js";

/** Refits that are worth a thread of their own, and that are asked of one at a time. */
const worthAThread = 30;
const spanLength = 10;
/** Young memory of a thread, MB: what a refit needs for a moment is then seldom moved about. */
const maxYoungGenerationSizeMb = 64;

/** What listens to a run of refits. */
export interface RefitListener {
  /** Refits that have come in; called often. */
  rows(rows: RefitRows): void;
  cancelled(): boolean;
}

/**
 * Does refits by number in this thread and, where there are many, in others beside it. What comes in does not depend on how many
 * there are.
 * @param own  the refits of the job, for this thread
 * @param threads  at most so many; undefined: as many as there are cores
 * @returns when all are done or it was cancelled
 */
export async function runRefits(
  own: Refits,
  job: RefitJob,
  wanted: readonly number[],
  threads: number | undefined,
  listener: RefitListener,
): Promise<void> {
  const spans = spansOf(wanted);
  const most = Math.min(threads ?? availableParallelism(), Math.ceil(wanted.length / worthAThread));
  const file = threadFile("refit-worker");
  const others = file ? Math.max(0, most - 1) : 0;
  await Promise.all([
    ...Array.from({ length: others }, () => oneThread(file as string, job, spans, listener)),
    inThisThread(own, spans, listener),
  ]);
}

/** Takes spans from the front of the list until there are none. */
function oneThread(file: string, job: RefitJob, spans: RefitSpan[], listener: RefitListener): Promise<void> {
  return new Promise((resolve, reject) => {
    const worker = new Worker(file, { workerData: job, resourceLimits: { maxYoungGenerationSizeMb } });
    const watch = setInterval(() => {
      if (listener.cancelled()) end();
    }, 50);
    const end = (): void => {
      clearInterval(watch);
      void worker.terminate();
      resolve();
    };
    const next = (): void => {
      const span = listener.cancelled() ? undefined : spans.shift();
      if (span) worker.postMessage(span);
      else end();
    };
    worker.on("message", (rows: RefitRows) => {
      listener.rows(rows);
      next();
    });
    worker.on("error", (e) => {
      clearInterval(watch);
      reject(e);
    });
    next();
  });
}

async function inThisThread(own: Refits, spans: RefitSpan[], listener: RefitListener): Promise<void> {
  for (let span = spans.shift(); span; span = spans.shift()) {
    for (let r = span.from; r < span.to; r++) {
      if (listener.cancelled()) return;
      listener.rows(rowsOf(own, { from: r, to: r + 1 }));
      // Between refits interrupts and other threads are heard.
      await new Promise(setImmediate);
    }
  }
}

function spansOf(wanted: readonly number[]): RefitSpan[] {
  const spans: { from: number; to: number }[] = [];
  for (const r of wanted) {
    const last = spans.at(-1);
    if (last && last.to === r && r - last.from < spanLength) last.to++;
    else spans.push({ from: r, to: r + 1 });
  }
  return spans;
}
