import { expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Network } from "../../src/model/network.js";
import { parseNetwork } from "../../src/parse/network.js";
import { hangsOnGuess } from "../../src/study/trial-facts.js";

const network = (parameters: string, tank: string): Network => {
  const { document, problems } = parseNetwork(
    `network: T\nformat: 1\nparameters: {${parameters}}\nfeeds: {feed: {flow: 10 L/min, to: a}}\ncompartments: {a: {kind: stirred, volume: V, to: b}, b: {kind: stirred, volume: ${tank}, to: out}}\noutlets: [out]\n`,
  );
  if (!document || !compile(document).plant) throw new Error(problems.map((p) => p.message).join("\n"));
  return document;
};

test("a start value that a fit may move is no fact; a total that it leaves alone is, and so is a value with its ±", () => {
  const guessed = (n: Network) => hangsOnGuess(n, {}, (p) => p.volume.total);
  expect(guessed(network("V: {value: 60 L, between: [10 L, 200 L]}", "40 L"))).toBe(true);
  expect(guessed(network("V: {value: 60 L, between: [10 L, 90 L]}", "100 L - V"))).toBe(false);
  expect(guessed(network("V: {value: 60 L ± 2 L, between: [10 L, 200 L]}", "40 L"))).toBe(false);
  expect(hangsOnGuess(network("V: {value: 60 L, between: [10 L, 200 L]}", "40 L"), {}, (p) => p.feeds[0].flow)).toBe(
    false,
  );
});
