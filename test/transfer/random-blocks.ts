import { uniformSource } from "../simulate/seeded.js";

/** Bodies of every kind; `open` and `laminar` where asked for. */
function bodyOf(random: () => number, endless: boolean): string {
  const number = (low: number, high: number) => (low * (high / low) ** random()).toPrecision(4);
  const pockets =
    random() < 0.5 ? `, stagnant: {volume: ${number(0.1, 30)} L, exchange: ${number(0.01, 10)} L/min}` : "";
  const volume = `volume: ${number(1, 100)} L`;
  const kinds = [
    `stirred, ${volume}${pockets}`,
    `stirred, ${volume}, repeat: ${2 + Math.floor(5 * random())}, backflow: ${random() < 0.5 ? `${number(1, 300)} %` : `${number(0.1, 9)} L/min`}${pockets}`,
    `tubular, ${volume}${pockets}`,
    `dispersed, ${volume}, peclet: ${number(0.01, 1e4)}${pockets}`,
    `cascade, ${volume}, tanks: ${number(1, 1000)}${pockets}`,
    "junction",
    `laminar, ${volume}`,
  ];
  return kinds[Math.floor(random() * (endless ? kinds.length : kinds.length - 1))];
}

/** A random network of all kinds as text: a chain with bypasses to a side outlet, and one recycle (ratio up to 1000) or several (up to 3). */
export function randomBlocks(seed: number, endless = false): string {
  const random = uniformSource(seed);
  const count = 2 + Math.floor(7 * random());
  const single = random() < 0.5;
  let recycles = 0;
  const lines = Array.from({ length: count }, (_, i) => {
    const next = i + 1 < count ? `n${i + 1}` : "out";
    const kind = bodyOf(random, endless);
    let to = next;
    if (i > 0 && random() < 0.35 && !(single && recycles > 0)) {
      recycles++;
      const share = (single ? 100 * (1 - 10 ** (-3 * random())) : 75 * random()).toFixed(4);
      to = `{n${Math.floor(i * random())}: ${share} %, ${next}: rest}`;
    } else if (random() < 0.25 && next !== "out") to = `{side: ${(5 + 30 * random()).toFixed(2)} %, ${next}: rest}`;
    return `  n${i}: {kind: ${kind}, to: ${to}}`;
  });
  return [
    "network: Random, of all kinds",
    "format: 1",
    `feeds: {feed: {flow: ${(1 + 9 * random()).toFixed(3)} L/min, to: {n0: rest, side: 4 %}}}`,
    "compartments:",
    ...lines,
    "outlets: [out, side]",
    "",
  ].join("\n");
}
