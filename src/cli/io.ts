import {
  accessSync,
  constants,
  existsSync,
  mkdirSync,
  readdirSync,
  realpathSync,
  renameSync,
  rmSync,
  statSync,
  writeFileSync,
} from "node:fs";
import { basename, dirname, join, resolve } from "node:path";
import type { Obstacle } from "../problems/obstacle.js";
import { largestTable } from "../read/files.js";
import { obstacleAt, readRegular, readStream, statOf, streamNumber } from "./read-file.js";
import { UsageError } from "./usage.js";

/** 0 done; 1 input wrong; 2 wrong usage; 3 numerics did not converge, or a fault of ours; 130 interrupted. */
export type ExitStatus = 0 | 1 | 2 | 3 | 130;

/** The world as a command sees it. The only way from the program to files and terminal. */
export interface Io {
  /**
   * The content of a file by its path from the current folder, of standard input for `-`, or of another stream that is
   * open already; undefined where nothing can be read. Of more than `most` bytes, so many and one more.
   */
  read(path: string, most?: number): Uint8Array | string | undefined;
  /** Why what is at a path cannot be read as a file; undefined where it can, or where nothing is there. */
  obstacle(path: string): Obstacle | undefined;
  /** Files and folders in a folder; undefined where it cannot be listed. A link to a folder is no folder, one to nowhere is lost. */
  list(
    path: string,
  ): readonly { readonly name: string; readonly is: "file" | "folder" | "other" | "lost" }[] | undefined;
  /** What a path leads to, links followed, with forward slashes from the root of the machine. */
  real?(path: string): string;
  /** Bytes of a file; undefined where there is none. */
  size?(path: string): number | undefined;
  /**
   * The folder that a document's parts and bases may not leave: the repository that it is in, else the current folder
   * where it lies there, else its own.
   */
  library?(path: string): string;
  /** Writes a file whole or not at all, into a folder that is there. Throws UsageError where it cannot. */
  write(path: string, content: string | Uint8Array): void;
  /** Makes a folder, and those above it, where they are not there. Throws UsageError where nothing can be written to it. */
  makeFolder(path: string): void;
  out(text: string): void;
  err(text: string): void;
  /** Is standard error a terminal, so that a line of progress makes sense? */
  readonly isTerminal: boolean;
  readonly colour: { readonly out: boolean; readonly err: boolean };
  /** True once the user has asked to stop. */
  cancelled(): boolean;
}

/** Files of this machine, relative to `cwd`. */
export function files(
  cwd: string,
): Pick<Io, "read" | "obstacle" | "list" | "real" | "size" | "library" | "write" | "makeFolder"> {
  const real = (path: string): string => slashed(realPath(resolve(cwd, path)));
  return {
    real,
    size: (path) => statOf(resolve(cwd, path))?.size,
    library(path) {
      const own = path === "-" ? real(".") : real(dirname(real(path)));
      const here = real(".");
      return repositoryAbove(own) ?? (`${own}/`.startsWith(`${here}/`) ? here : own);
    },
    read(path, most = largestTable) {
      const stream = streamNumber(path);
      return stream === undefined ? readRegular(resolve(cwd, path), most) : readStream(stream, most);
    },
    obstacle: (path) => obstacleAt(resolve(cwd, path)),
    list(path) {
      try {
        return readdirSync(resolve(cwd, path), { withFileTypes: true }).map((entry) => ({
          name: entry.name,
          is: entry.isDirectory() ? "folder" : leadsTo(resolve(cwd, path, entry.name)),
        }));
      } catch {
        return undefined;
      }
    },
    write(path, content) {
      const target = resolve(cwd, path);
      const draft = `${target}.${process.pid}.tmp`;
      try {
        writeFileSync(draft, content);
        renameSync(draft, target);
      } catch (e) {
        discard(draft);
        throw new UsageError(`'${path}' cannot be written: ${whyNot(e)}`);
      }
    },
    makeFolder(path) {
      try {
        makeFolder(resolve(cwd, path));
        accessSync(resolve(cwd, path), constants.W_OK);
      } catch (e) {
        throw new UsageError(`nothing can be written to the folder '${path}': ${whyNot(e)}`);
      }
    },
  };
}

/** Folder by folder: Node's own recursive way never ends where a parent says that it is not there. */
function makeFolder(path: string): void {
  const there = statSync(path, { throwIfNoEntry: false });
  if (there && !there.isDirectory()) throw Object.assign(new Error("no folder"), { code: "ENOTDIR" });
  if (there) return;
  makeFolder(dirname(path));
  mkdirSync(path);
}

function whyNot(e: unknown): string {
  const code = (e as NodeJS.ErrnoException).code ?? String(e);
  const words: Record<string, string> = {
    ENOENT: "there is no such folder",
    ENOTDIR: "a part of the path is a file",
    EACCES: "it is not allowed",
    EROFS: "it is read-only",
    EISDIR: "it is a folder",
    ELOOP: "a link in the path leads back to itself",
    ENOSPC: "the disk is full",
  };
  return words[code] ?? code;
}

/** Of what is not there, as far as it can be followed. */
function realPath(path: string): string {
  try {
    return realpathSync(path);
  } catch {
    const above = dirname(path);
    return above === path ? path : join(realPath(above), basename(path));
  }
}

/** The nearest folder upwards that is under version control. */
function repositoryAbove(folder: string): string | undefined {
  for (let at = folder; ; at = dirname(at)) {
    if (existsSync(join(at, ".git"))) return slashed(at);
    if (dirname(at) === at) return undefined;
  }
}

const slashed = (path: string): string => path.replace(/\\/g, "/");

/** A link counts as what it leads to. */
function leadsTo(path: string): "file" | "other" | "lost" {
  const found = statOf(path);
  return !found ? "lost" : found.isFile() ? "file" : "other";
}

/** Takes a draft away, where there is one. */
function discard(draft: string): void {
  try {
    rmSync(draft, { force: true });
  } catch {
    // There never was one: its folder is no folder.
  }
}

/** What the process says of its terminal; colour as NO_COLOR and FORCE_COLOR ask (no-color.org). */
export function terminal(): Pick<Io, "isTerminal" | "colour"> {
  const { NO_COLOR, FORCE_COLOR, TERM } = process.env;
  const wanted = (tty: boolean): boolean => (FORCE_COLOR ? FORCE_COLOR !== "0" : tty && !NO_COLOR && TERM !== "dumb");
  return {
    isTerminal: process.stderr.isTTY === true,
    colour: { out: wanted(process.stdout.isTTY === true), err: wanted(process.stderr.isTTY === true) },
  };
}

/** The two output streams of the process. */
export const streams: Pick<Io, "out" | "err"> = {
  out: (text) => void process.stdout.write(text),
  err: (text) => void process.stderr.write(text),
};

/** Ends the process quietly when whoever reads our output has had enough, as `head` does. */
export function endWithReader(): void {
  process.stdout.on("error", (e: NodeJS.ErrnoException) => {
    if (e.code !== "EPIPE") throw e;
    process.exit();
  });
}

/** Calls back at each interrupt instead of ending the process; returns what undoes it. */
export function onInterrupt(heard: () => void): () => void {
  process.on("SIGINT", heard);
  return () => void process.off("SIGINT", heard);
}
