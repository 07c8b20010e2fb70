import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";

/** Every shipped document and table by its path in a clone. */
export function corpusOf(root: string): Map<string, Uint8Array> {
  const files = ["networks", "shared"].flatMap((folder) =>
    readdirSync(join(root, folder), { recursive: true, encoding: "utf8" })
      .filter((file) => /\.(yaml|csv)$/.test(file) && !file.includes("reference"))
      .map((file) => `${folder}/${file.replace(/\\/g, "/")}`),
  );
  return new Map(files.sort().map((path) => [path, new Uint8Array(readFileSync(join(root, path)))]));
}
