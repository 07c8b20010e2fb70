import { readFileSync } from "node:fs";

/** The cells of a plain table without its header. */
export const readNamed = (path: string): string[][] =>
  readFileSync(path, "utf8")
    .trim()
    .split("\n")
    .slice(1)
    .map((line) => line.split(","));
