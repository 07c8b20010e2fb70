import { uniformSource } from "./seeded.js";

/**
 * A random network as text: a chain from feed to outlet so that all is reachable, with bypasses, recycles (ratio up to
 * 3), exchanges with corners, junctions, and at most two tubes inside loops.
 */
export function randomNetwork(seed: number): string {
  const random = uniformSource(seed);
  const pick = (n: number) => Math.floor(random() * n);
  const count = 2 + pick(7);
  const lines: string[] = [];
  let loopTubes = 0;
  for (let i = 0; i < count; i++) {
    const next = i + 1 < count ? `n${i + 1}` : "out";
    const kind = ["stirred", "stirred", "tubular", "junction"][pick(4)];
    const keys = kind === "junction" ? "" : `, volume: ${(1 + 99 * random()).toFixed(3)} L`;
    let to = next;
    if (i > 0 && random() < 0.3 && loopTubes < 2) {
      const back = pick(i);
      to = `{n${back}: ${(20 + 55 * random()).toFixed(2)} %, ${next}: rest}`;
      loopTubes++;
    } else if (random() < 0.25 && next !== "out")
      to = `{${random() < 0.5 ? "out" : "side"}: ${(5 + 30 * random()).toFixed(2)} %, ${next}: rest}`;
    const corner = kind === "stirred" && random() < 0.4;
    const exchange = corner ? `, exchange: {s${i}: ${(0.05 + 3 * random()).toFixed(3)} L/min}` : "";
    lines.push(`  n${i}: {kind: ${kind}${keys}, to: ${to}${exchange}}`);
    if (corner) lines.push(`  s${i}: {kind: stirred, volume: ${(1 + 30 * random()).toFixed(3)} L}`);
  }
  return [
    "network: Random",
    "format: 1",
    "feeds:",
    `  feed: {flow: ${(1 + 9 * random()).toFixed(3)} L/min, to: {n0: rest, side: 4 %}}`,
    "compartments:",
    ...lines,
    "outlets: [out, side]",
    "",
  ].join("\n");
}
