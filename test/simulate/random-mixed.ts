import { uniformSource } from "./seeded.js";

/**
 * A random network of up to 30 compartments of all kinds as text: a chain with bypasses to a side outlet, exchange with corners,
 * and recycles (one of them up to 100 times the feed), with at most four tubes inside loops; closed ends.
 */
export function randomMixed(seed: number, most = 30): string {
  const random = uniformSource(seed);
  const number = (low: number, high: number) => (low * (high / low) ** random()).toPrecision(5);
  const count = 2 + Math.floor((most - 1) * random() ** 2);
  const strong = random() < 0.3 ? 1 + Math.floor((count - 1) * random()) : -1;
  const back = Array.from({ length: count }, (_, i) => {
    return i > 0 && (i === strong || random() < 0.12) ? Math.max(0, i - Math.floor(6 * random())) : -1;
  });
  const looped = (i: number) => back.some((from, to) => from >= 0 && from <= i && i <= to);
  let loopTubes = 0;
  const body = (i: number): string => {
    const pockets =
      random() < 0.25 ? `, stagnant: {volume: ${number(0.3, 20)} L, exchange: ${number(0.05, 5)} L/min}` : "";
    const volume = `volume: ${number(1, 60)} L`;
    const tube = () => {
      if (looped(i) && ++loopTubes > 4) return `stirred, ${volume}`;
      return `tubular, ${volume}${looped(i) ? "" : pockets}`;
    };
    const kinds = [
      () => `stirred, ${volume}${pockets}`,
      () => `stirred, ${volume}`,
      () => `stirred, ${volume}, repeat: ${2 + Math.floor(6 * random())}, backflow: ${number(1, 200)} %`,
      tube,
      tube,
      () => `dispersed, ${volume}, peclet: ${number(0.05, 1000)}${pockets}`,
      () => `cascade, ${volume}, tanks: ${number(1.3, 40)}${pockets}`,
      () => (looped(i) ? `stirred, ${volume}` : `laminar, ${volume}`),
      () => "junction",
    ];
    return kinds[Math.floor(random() * kinds.length)]();
  };
  const lines: string[] = [];
  for (let i = 0; i < count; i++) {
    const next = i + 1 < count ? `n${i + 1}` : "out";
    const kind = body(i);
    let to = next;
    if (back[i] >= 0) {
      const ratio = i === strong ? 10 ** (2 * random()) : 3 * random() + 0.05;
      to = `{n${back[i]}: ${((100 * ratio) / (1 + ratio)).toPrecision(8)} %, ${next}: rest}`;
    } else if (random() < 0.15 && next !== "out") to = `{side: ${number(3, 30)} %, ${next}: rest}`;
    const corner = /^stirred, volume: [^,]*$/.test(kind) && random() < 0.3;
    lines.push(
      `  n${i}: {kind: ${kind}, to: ${to}${corner ? `, exchange: {s${i}: ${number(0.02, 5)} L/min}` : ""}}`,
      ...(corner ? [`  s${i}: {kind: stirred, volume: ${number(0.5, 20)} L}`] : []),
    );
  }
  return [
    "network: Random, of all kinds",
    "format: 1",
    `feeds: {feed: {flow: ${number(1, 10)} L/min, to: {n0: rest, side: 4 %}}}`,
    "compartments:",
    ...lines,
    "outlets: [out, side]",
    "",
  ].join("\n");
}
