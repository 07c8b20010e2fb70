import { createHash } from "node:crypto";
import { type Bootstrap, bootstrapOf } from "../fit/bootstrap.js";
import { type Resampling, refitsOf } from "../fit/resample.js";
import type { Fit } from "../fit/result.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Context } from "./context.js";
import { UsageError } from "./outcome.js";
import { progressOn } from "./progress.js";
import type { RefitRows } from "./refit-job.js";
import { runRefits } from "./refit-threads.js";

export interface BootstrapOptions {
  readonly bootstrap: number;
  readonly resample?: Resampling;
  readonly resume?: string;
  readonly jobs?: number;
  readonly free?: readonly string[];
  readonly seed: number;
}

/** How often what is done so far is saved, ms. */
const saveEvery = 3000;

/** Refits of a fit on all cores, from where an earlier run left off. */
export async function bootstrap(
  network: Network,
  trials: readonly Trial[],
  fit: Fit,
  options: BootstrapOptions,
  { inputs, io }: Context,
): Promise<Bootstrap> {
  const { bootstrap: asked, seed, resume } = options;
  const job = {
    network: network.path,
    trials: trials.map((t) => t.path),
    contents: inputs.all,
    free: options.free,
    values: fit.values,
    resampling: options.resample,
    seed,
  };
  const how = refitsOf(network, trials, {
    values: fit.values,
    seed,
    ...(options.free ? { free: options.free } : {}),
    ...(options.resample ? { resampling: options.resample } : {}),
  });
  if (!how) throw new UsageError("--bootstrap: there is no fit to refit");
  const files = await inputs.list();
  const key = createHash("sha256")
    .update(JSON.stringify([files.map((f) => f.sha256), fit.values, seed, how.resampling]))
    .digest("hex");
  const rows = new Map(resume ? saved(resume, key, io.read(resume)) : []);
  const wanted = Array.from({ length: asked }, (_, r) => r).filter((r) => !rows.has(r));
  const progress = progressOn(io);
  const started = performance.now();
  let savedAt = started;
  const save = (): void => {
    if (resume)
      io.write(resume, `${JSON.stringify({ bootstrap: key, rows: [...rows].sort((a, b) => a[0] - b[0]) })}\n`);
  };
  const before = rows.size;
  await runRefits(how, job, wanted, options.jobs, {
    cancelled: io.cancelled,
    rows(more) {
      for (const [r, values] of more) rows.set(r, values);
      const now = performance.now();
      const left = ((asked - rows.size) * (now - started)) / Math.max(1, rows.size - before);
      progress.say(`bootstrap: ${rows.size} of ${asked} refits, about ${Math.ceil(left / 1000)} s left`);
      if (resume && now - savedAt > saveEvery) {
        save();
        savedAt = now;
      }
    },
  });
  progress.done();
  save();
  const done = [...rows].filter(([r]) => r < asked).sort((a, b) => a[0] - b[0]);
  return bootstrapOf(
    fit,
    asked,
    how,
    done.map(([, values]) => values ?? undefined),
  );
}

/** What an earlier run saved. */
function saved(path: string, key: string, content: string | Uint8Array | undefined): RefitRows {
  if (content === undefined) return [];
  const text = typeof content === "string" ? content : new TextDecoder().decode(content);
  let found: unknown;
  try {
    found = JSON.parse(text);
  } catch {
    found = undefined;
  }
  const { bootstrap: of, rows } = (found ?? {}) as { bootstrap?: unknown; rows?: RefitRows };
  if (typeof of !== "string" || !Array.isArray(rows))
    throw new UsageError(
      `--resume: '${path}' was not written by a bootstrap; name another file, or one that is not there yet`,
    );
  if (of !== key)
    throw new UsageError(
      `--resume: '${path}' belongs to another fit: a file, the seed or the resampling has changed; name another file to begin anew`,
    );
  return rows;
}
