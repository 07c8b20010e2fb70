import { describe, expect, test } from "vitest";
import { faultOf } from "./survive.js";

const head = "network: A\nformat: 1\n";
const tail =
  "feeds: {feed: {flow: 1 L/min, to: a}}\ncompartments:\n  a: {kind: stirred, volume: 1 L, to: out}\noutlets: [out]\n";
const megabyte = 2 ** 20;
const fill = (unit: string, length = 1.9 * megabyte): string => unit.repeat(length / unit.length);
const many = (n: number, f: (i: number) => string): string => Array.from({ length: n }, (_, i) => f(i)).join("");

/** Files as large as they may be, or much larger, of one thing only. None is worth more than two seconds, nor much memory. */
const extremes: Record<string, string> = {
  "a text of 10 MB": `${head}notes: ${fill("x", 10 * megabyte)}\n${tail}`,
  "a text of 2 MB": `${head}notes: ${fill("x")}\n${tail}`,
  "escapes in quotes": `${head}notes: "${fill("\\n")}"\n${tail}`,
  "a number of 2 million digits": `${head}constants: {a: ${fill("9")} L}\n${tail}`,
  "a sum of 500,000 terms": `${head}constants: {a: 1${fill(" + 1")}}\n${tail}`,
  "a name of 2 MB": `${head}constants: {${fill("x")}: 1 L}\n${tail}`,
  "a kind of 2 MB": head + tail.replace("stirred", fill("s")),
  "10,000 braces": "{".repeat(10_000),
  "2 million brackets": `${head}outlets: ${fill("[")}`,
  "2 million colons": fill(":"),
  "a million dashes": fill("- "),
  "a million lines": fill("#\n"),
  "blanks only": fill(" "),
  "24,000 constants on one line": `${head}constants: {${many(24_000, (i) => `c${i}: 1 L, `)}}\n${tail}`,
  "24,000 constants": `${head}constants:\n${many(24_000, (i) => `  c${i}: 1 L\n`)}${tail}`,
  "48,000 outlets": `${head}outlets: [${"a, ".repeat(48_000)}a]\n`,
  "24,000 anchors": `${head}outlets: [${"&a a, ".repeat(24_000)}]\n`,
  "24,000 aliases": `${head}outlets: [&a a, ${"*a, ".repeat(24_000)}]\n`,
  "a circle of anchors": `${head}notes: &a {b: &b {a: *a, b: *b}}\n${tail}`,
  "a merge of itself": `${head}notes: &a {<<: *a}\n${tail}`,
  "numbers that are none": `${head}constants: {a: NaN, b: .nan, c: .inf L, d: 1e999 L, e: -1e999, f: Infinity}\n${tail}`,
  "the prototype everywhere":
    "network: A\nformat: 1\n__proto__: {a: 1}\nconstants: {__proto__: {value: 1 L}}\nfeeds: {__proto__: {flow: 1 L/min, to: __proto__}}\ncompartments: {__proto__: {kind: __proto__, __proto__: 1 L}}\noutlets: [__proto__]\n",
};

/** Seconds of processor time, which other work on the machine does not stretch; twice the promise, for parallel collectors. */
const patience = 4;

describe("files of one thing only", () => {
  test.each(Object.entries(extremes))("%s", async (_, text) => {
    const bytes = new TextEncoder().encode(text);
    const before = process.cpuUsage();
    expect(await faultOf({ path: "a.yaml", bytes }, new Map(), [["check", "a.yaml"]])).toBeUndefined();
    const { user, system } = process.cpuUsage(before);
    expect((user + system) / 1e6).toBeLessThan(patience);
    expect(process.memoryUsage().rss).toBeLessThan(2 ** 30);
  });
});
