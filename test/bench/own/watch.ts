import { cpSync, readFileSync, renameSync, rmSync, writeFileSync } from "node:fs";
import { get } from "node:http";
import { join } from "node:path";
import { files } from "../../../src/cli/io.js";
import { startWatching } from "../../../src/cli/watch/watching.js";

const saves = 15;

/** Time from a save to its new picture on the wire: root of the project, a folder for copies, the document. */
export async function watch([root, folder, file]: string[]): Promise<Record<string, unknown>> {
  for (const part of ["networks", "shared"]) cpSync(join(root, part), join(folder, part), { recursive: true });
  const watching = await startWatching([file], files(folder), {
    cwd: folder,
    port: 0,
    allowOutside: false,
    clock: () => new Date(),
  });
  const redrawn = listen(`${watching.url}events`);
  await redrawn();
  const path = join(folder, file);
  const text = readFileSync(path, "utf8");
  const seconds: number[] = [];
  for (let k = 0; k < saves; k++) {
    const began = performance.now();
    const next = redrawn();
    writeFileSync(`${path}~`, `${text}\n# ${k}\n`);
    renameSync(`${path}~`, path);
    await next;
    seconds.push((performance.now() - began) / 1000);
  }
  await watching.close();
  rmSync(folder, { recursive: true });
  const [first] = seconds;
  seconds.sort((a, b) => a - b);
  return { first_s: first, solve_s: seconds[seconds.length >> 1] };
}

/** Promises of the next event of a stream. */
function listen(url: string): () => Promise<void> {
  let pending = 0;
  let waiting: (() => void) | undefined;
  get(url, (response) => {
    response.setEncoding("utf8");
    response.on("data", (chunk: string) => {
      pending += chunk.split("\n").filter((line) => line.startsWith("data:")).length;
      if (pending > 0 && waiting) {
        pending--;
        waiting();
        waiting = undefined;
      }
    });
    response.on("error", () => {});
  }).on("error", () => {});
  return () =>
    new Promise((done) => {
      if (pending > 0) {
        pending--;
        done();
      } else waiting = done;
    });
}
