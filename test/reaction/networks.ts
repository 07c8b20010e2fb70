import type { Sketch } from "./make.js";

/** n equal cells in a row, total volume and flow 1 apart. */
function row(n: number, volume: number): Sketch {
  const cells = Object.fromEntries(Array.from({ length: n }, (_, i) => [`c${i}`, volume / n]));
  const names = ["feed", ...Object.keys(cells), "out"];
  return { cells, links: names.slice(1).map((name, i) => [names[i], name, 1] as const) };
}

const tankThenTube = (tank: number, tube: number): Sketch => ({
  cells: { tank },
  tubes: { tube },
  links: [
    ["feed", "tank", 1],
    ["tank", "tube", 1],
    ["tube", "out", 1],
  ],
});
const tubeThenTank = (tube: number, tank: number): Sketch => ({
  cells: { tank },
  tubes: { tube },
  links: [
    ["feed", "tube", 1],
    ["tube", "tank", 1],
    ["tank", "out", 1],
  ],
});

/** The networks of shared/reference/closed-forms/network-conversions.csv that are made of cells and tubes; flow 1. */
export const sketches: Readonly<Record<string, Sketch>> = {
  "tanks-N2-tau10": row(2, 10),
  "tanks-N5-tau10": row(5, 10),
  "tanks-N10-tau10": row(10, 10),
  "bypass-dead-b0.2-a0.7-tau10": {
    cells: { tank: 7 },
    links: [
      ["feed", "tank", 0.8],
      ["feed", "out", 0.2],
      ["tank", "out", 0.8],
    ],
  },
  "stagnant-phi0.3-q0.5-tau12": {
    cells: { tank: 8.4, corner: 3.6 },
    links: [
      ["feed", "tank", 1],
      ["tank", "corner", 0.5],
      ["corner", "tank", 0.5],
      ["tank", "out", 1],
    ],
  },
  "tank-then-plug-1-1": tankThenTube(1, 1),
  "plug-then-tank-1-1": tubeThenTank(1, 1),
  "tank-then-plug-6-4": tankThenTube(6, 4),
  "plug-then-tank-4-6": tubeThenTank(4, 6),
  "recycle-plug-R1-tau8": {
    tubes: { tube: 8 },
    links: [
      ["feed", "mix", 1],
      ["mix", "tube", 2],
      ["tube", "split", 2],
      ["split", "mix", 1],
      ["split", "out", 1],
    ],
  },
  "recycle-tanks-R2-N2-tau9": {
    cells: { a: 4.5, b: 4.5 },
    links: [
      ["feed", "a", 1],
      ["a", "b", 3],
      ["b", "a", 2],
      ["b", "out", 1],
    ],
  },
  "parallel-0.3-2-0.5-20-0.2-6": {
    cells: { quick: 0.6, slow: 10 },
    tubes: { tube: 1.2 },
    links: [
      ["feed", "quick", 0.3],
      ["feed", "slow", 0.5],
      ["feed", "tube", 0.2],
      ["quick", "out", 0.3],
      ["slow", "out", 0.5],
      ["tube", "out", 0.2],
    ],
  },
};
