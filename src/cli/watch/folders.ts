import { type FSWatcher, statSync, watch } from "node:fs";
import { dirname, resolve } from "node:path";

/** File systems that tell nothing are asked, ms. */
const ask = 1000;

/**
 * Tells when a file changes, also when an editor saves by writing a new file and renaming it: it is the folders that are
 * watched, not the files.
 */
export class Folders {
  readonly #watchers = new Map<string, FSWatcher>();
  readonly #files = new Map<string, string>();
  readonly #timer: NodeJS.Timeout;

  /** @param changed is called with the absolute path of a watched file */
  constructor(private readonly changed: (path: string) => void) {
    this.#timer = setInterval(() => this.#ask(), ask);
  }

  /** Watches these files from now on, and no others. Paths are absolute; nothing need be there. */
  follow(paths: Iterable<string>): void {
    const wanted = new Set([...paths].map((p) => resolve(p)));
    for (const path of this.#files.keys()) if (!wanted.has(path)) this.#files.delete(path);
    for (const path of wanted) if (!this.#files.has(path)) this.#files.set(path, stateOf(path));
    const folders = new Set([...wanted].map((p) => dirname(p)));
    for (const [folder, watcher] of this.#watchers) {
      if (folders.has(folder)) continue;
      watcher.close();
      this.#watchers.delete(folder);
    }
    for (const folder of folders) if (!this.#watchers.has(folder)) this.#begin(folder);
  }

  close(): void {
    clearInterval(this.#timer);
    for (const watcher of this.#watchers.values()) watcher.close();
    this.#watchers.clear();
  }

  #begin(folder: string): void {
    try {
      const watcher = watch(folder, (_, name) => {
        const paths = name === null ? [...this.#files.keys()] : [resolve(folder, name)];
        for (const path of paths) if (this.#files.has(path)) this.#tell(path);
      });
      // A folder that goes away: from then on it is asked for.
      watcher.on("error", () => {
        watcher.close();
        this.#watchers.delete(folder);
      });
      this.#watchers.set(folder, watcher);
    } catch {
      // No such folder, or no more watchers to be had: asking remains.
    }
  }

  #ask(): void {
    for (const [path, known] of this.#files) if (stateOf(path) !== known) this.#tell(path);
  }

  #tell(path: string): void {
    this.#files.set(path, stateOf(path));
    this.changed(path);
  }
}

/** What differs after a save: when, how long, which file. */
function stateOf(path: string): string {
  try {
    const { mtimeMs, size, ino } = statSync(path);
    return `${mtimeMs} ${size} ${ino}`;
  } catch {
    return "";
  }
}
