import type { Context } from "./context.js";
import { onInterrupt } from "./io.js";
import { type Outcome, UsageError } from "./outcome.js";
import { startWatching } from "./watch/watching.js";

export interface WatchOptions {
  readonly port: number;
}

/** `watch FILE…`: a page on this machine that draws the files anew on every save, until it is interrupted. */
export async function watch(
  files: readonly string[],
  { port }: WatchOptions,
  { inputs, io }: Context,
): Promise<Outcome> {
  if (files.includes("-")) throw new UsageError("watch needs files to look at, not standard input");
  const interrupted = new Promise<void>((done) => {
    const undo = onInterrupt(() => {
      undo();
      done();
    });
  });
  const { allowOutside } = inputs;
  const cwd = process.cwd();
  const watching = await startWatching(files, io, { cwd, port, allowOutside, clock: () => new Date() });
  io.err(`watching ${files.join(", ")} at ${watching.url} (Ctrl-C ends)\n`);
  await interrupted;
  await watching.close();
  return { status: 0, text: "", json: { ok: true, url: watching.url, files } };
}
