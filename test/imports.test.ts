import { readdirSync, readFileSync } from "node:fs";
import { dirname, join, relative } from "node:path";
import { expect, test } from "vitest";
import { layers } from "./layers.js";

interface Import {
  readonly from: string;
  readonly to: string;
}

const src = join(import.meta.dirname, "../src");

const files = readdirSync(src, { recursive: true, encoding: "utf8" })
  .map((file) => file.replace(/\\/g, "/"))
  .filter((file) => file.endsWith(".ts"));

const imports = files.flatMap(importsOf);

/** Static, dynamic and type imports alike; comments do not count. */
function importsOf(file: string): Import[] {
  const text = readFileSync(join(src, file), "utf8").replace(/\/\*[\s\S]*?\*\/|^\s*\/\/.*$/gm, "");
  const targets = text.matchAll(/(?:\bfrom|\bimport)\s*\(?\s*"([^"]+)"/g);
  return [...targets].map(([, target]) => ({
    from: file,
    to: target.startsWith(".")
      ? relative(src, join(src, dirname(file), target))
          .replace(/\\/g, "/")
          .replace(/\.js$/, ".ts")
      : target,
  }));
}

const isOurs = ({ to }: Import): boolean => to.endsWith(".ts");
const folder = (file: string): string => (file.includes("/") ? file.slice(0, file.indexOf("/")) : "");
const rank = (file: string): number =>
  folder(file) === "" ? layers.length : (layers as readonly string[]).indexOf(folder(file));
const arrow = ({ from, to }: Import): string => `${from} -> ${to}`;

test("there are imports to look at, in folders that have their place in the order", () => {
  expect(imports.filter(isOurs).length).toBeGreaterThan(10);
  expect(files.filter((file) => rank(file) < 0)).toEqual([]);
});

test("imports point down the order of layers", () => {
  expect(imports.filter((i) => isOurs(i) && rank(i.to) > rank(i.from)).map(arrow)).toEqual([]);
});

test("only the command line touches the machine", () => {
  expect(imports.filter((i) => /^node:/.test(i.to) && folder(i.from) !== "cli").map(arrow)).toEqual([]);
});

test("no file imports itself, not even by way of others", () => {
  const ours = imports.filter(isOurs);
  const done = new Set<string>();
  const circles: string[] = [];
  const visit = (file: string, path: readonly string[]): void => {
    if (path.includes(file)) circles.push([...path.slice(path.indexOf(file)), file].join(" -> "));
    if (done.has(file) || path.includes(file)) return;
    for (const { to } of ours.filter((i) => i.from === file)) visit(to, [...path, file]);
    done.add(file);
  };
  for (const file of files) visit(file, []);
  expect(circles).toEqual([]);
});
