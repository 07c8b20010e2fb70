import { join } from "node:path";
import { expect, test } from "vitest";
import { corpusOf } from "./corpus.js";
import { inputOf } from "./input.js";
import { faultOf } from "./survive.js";

/** `npm run fuzz` goes on for as long as one likes; this is a taste of it, always the same. */
const inputs = 100;
const seed = 1;

/** Seconds of processor time, which other work on the machine does not stretch. */
const patience = 2;

test("mutated files are taken as what they are", async () => {
  const corpus = corpusOf(join(import.meta.dirname, "../.."));
  const wrong: string[] = [];
  for (let n = 0; n < inputs; n++) {
    const before = process.cpuUsage();
    const input = inputOf(corpus, seed, n);
    const fault = await faultOf(input, corpus);
    const { user, system } = process.cpuUsage(before);
    if (fault) wrong.push(`input ${n} (${input.path}): ${fault}`);
    if ((user + system) / 1e6 > patience) wrong.push(`input ${n} (${input.path}) took ${(user + system) / 1e6} s`);
  }
  expect(wrong).toEqual([]);
});

test("an input can be made again from its number", () => {
  const corpus = corpusOf(join(import.meta.dirname, "../.."));
  for (const n of [0, 7, 1234]) expect(inputOf(corpus, 3, n)).toEqual(inputOf(corpus, 3, n));
  const texts = new Set(Array.from({ length: 50 }, (_, n) => new TextDecoder().decode(inputOf(corpus, 3, n).bytes)));
  expect(texts.size).toBeGreaterThan(45);
});

test.each(["-3", "x", "2.5", "1e9"])("found by fuzzing: a part repeated %s times", async (times) => {
  const corpus = corpusOf(join(import.meta.dirname, "../.."));
  const path = "networks/reuse/train.yaml";
  const text = new TextDecoder().decode(corpus.get(path));
  expect(text).toMatch(/repeat: \d+/);
  const bytes = new TextEncoder().encode(text.replace(/repeat: \d+/, `repeat: ${times}`));
  expect(await faultOf({ path, bytes }, corpus)).toBeUndefined();
});
