import { accessSync, closeSync, constants, fstatSync, openSync, readSync, type Stats, statSync } from "node:fs";
import type { Obstacle } from "../problems/obstacle.js";

/** What a path leads to, links followed; undefined where there is nothing, or no way to it. */
export function statOf(path: string): Stats | undefined {
  try {
    return statSync(path, { throwIfNoEntry: false });
  } catch {
    return undefined; // a link that leads to itself, a folder that may not be entered
  }
}

/** Why a path cannot be read as a file; undefined where it can, or where nothing is there. */
export function obstacleAt(path: string): Obstacle | undefined {
  try {
    const found = statSync(path, { throwIfNoEntry: false });
    if (found?.isDirectory()) return "folder";
    if (found && !found.isFile()) return "device";
    if (found) accessSync(path, constants.R_OK);
    return undefined;
  } catch (e) {
    return obstacleOf(e);
  }
}

function obstacleOf(e: unknown): Obstacle | undefined {
  switch ((e as NodeJS.ErrnoException).code) {
    case "ENOENT":
    case "ENOTDIR":
      return undefined;
    case "ELOOP":
      return "loop";
    case "EACCES":
    case "EPERM":
      return "denied";
    default:
      return "other";
  }
}

/** A pipe with nobody at its other end must not keep us waiting; Windows knows no such flag. */
const nonBlocking = constants.O_NONBLOCK ?? 0;

/**
 * The bytes of a regular file.
 * @param most of a longer one, so many bytes and one more are read
 * @returns undefined where there is none, or where it is no regular file
 */
export function readRegular(path: string, most: number): Uint8Array | undefined {
  let file: number | undefined;
  try {
    file = openSync(path, constants.O_RDONLY | nonBlocking);
    const found = fstatSync(file);
    return found.isFile() ? readAll(file, most, found.size) : undefined;
  } catch {
    return undefined;
  } finally {
    if (file !== undefined) closeSync(file);
  }
}

/** The open stream that a name on the command line stands for, `-` or what a shell makes of `<(command)`. */
export function streamNumber(name: string): number | undefined {
  if (name === "-" || name === "/dev/stdin") return 0;
  const [, number] = /^\/(?:dev|proc\/self)\/fd\/(\d+)$/.exec(name) ?? [];
  return number === undefined ? undefined : Number(number);
}

/**
 * The bytes of an open stream to its end.
 * @param most of a longer one, so many bytes and one more are read
 * @returns undefined where it cannot be read
 */
export function readStream(number: number, most: number): Uint8Array | undefined {
  try {
    const found = fstatSync(number);
    // Other open files are none that a shell handed over.
    if (number > 2 && !found.isFIFO() && !found.isFile() && !found.isSocket()) return undefined;
    return readAll(number, most, 0);
  } catch {
    return undefined;
  }
}

const chunkSize = 65_536;

/** A pipe that does not block says EAGAIN while it is empty: that is no end of it. */
function readAll(file: number, most: number, expected: number): Uint8Array {
  const chunks: Uint8Array[] = [];
  const pause = new Int32Array(new SharedArrayBuffer(4));
  let total = 0;
  while (total <= most) {
    // One byte beyond the size that is told, so that one more turn finds the end.
    const wanted = Math.min(most + 1 - total, Math.max(chunkSize, expected + 1 - total));
    const chunk = Buffer.allocUnsafe(wanted);
    try {
      const size = readSync(file, chunk);
      if (size === 0) break;
      chunks.push(chunk.subarray(0, size));
      total += size;
    } catch (e) {
      const { code } = e as NodeJS.ErrnoException;
      if (code === "EOF") break;
      if (code !== "EAGAIN") throw e;
      Atomics.wait(pause, 0, 0, 10);
    }
  }
  return chunks.length === 1 ? chunks[0] : Buffer.concat(chunks, total);
}
