import type { Obstacle } from "../problems/obstacle.js";
import { beside, normalise } from "./paths.js";

/** How documents reach the files that they name. */
export interface Files {
  /** Text or bytes of a file by its path; undefined where there is none. */
  read(path: string): string | Uint8Array | undefined;
  /** The folder that parts and bases may not leave; undefined where nothing is outside. */
  readonly root?: string | undefined;
  /** The path that a path really leads to, links followed. */
  readonly real?: ((path: string) => string) | undefined;
  /** Bytes, where they can be told without reading the file. */
  readonly size?: ((path: string) => number | undefined) | undefined;
  /** Why what is at a path cannot be read, where something is there. */
  readonly obstacle?: ((path: string) => Obstacle | undefined) | undefined;
}

/** A document may have so many bytes, and so many letters. */
export const largestDocument = 2 * 1024 * 1024;

/** And a table so many: what a message can still show of a file is less than the longest string. */
export const largestTable = 500 * 1024 * 1024;

/** Is a file within the folder that parts and bases may not leave? Links count as what they lead to. */
export function isInside({ root, real = normalise }: Files, file: string): boolean {
  if (root === undefined) return true;
  const [folder, path] = [real(root), real(file)];
  if (folder === ".") return !isAbsolute(path) && !climbs(path);
  const start = folder.endsWith("/") ? folder : `${folder}/`;
  return path.startsWith(start) && !climbs(path.slice(start.length));
}

/**
 * The folder that a document's parts and bases may not leave where none is named: the current one where the document
 * lies in it, else the document's own.
 */
export function usualRoot(path: string): string {
  const file = normalise(path);
  return isAbsolute(file) || climbs(file) ? beside(file, ".") : ".";
}

const isAbsolute = (path: string): boolean => /^([A-Za-z]:)?\//.test(path);
const climbs = (path: string): boolean => path === ".." || path.startsWith("../");
