import { existsSync } from "node:fs";
import { fileURLToPath } from "node:url";

/** The file that a thread of the built program starts from, by its name; undefined where the sources run by themselves. */
export function threadFile(name: "thread" | "refit-worker"): string | undefined {
  const path = fileURLToPath(new URL(`../${name}.cjs`, import.meta.url));
  return existsSync(path) ? path : undefined;
}
